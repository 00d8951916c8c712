import { isMoorlineError, MoorlineError } from "@moorline/errors";
import { CommitUnanswered } from "./commit-unanswered.js";
import { isSqliteBusy, sqliteCode } from "./sqlite-code.js";

const SQLITE_IOERR = 10;
const SQLITE_CORRUPT = 11;
const SQLITE_FULL = 13;
const SQLITE_NOTADB = 26;

/** Node's and PostgreSQL's words for a server that is not there, goes away or has no place left for us. */
const AWAY = /^(ECONN|EPIPE|ETIMEDOUT|ENOTFOUND|EAI_AGAIN|EHOSTUNREACH|ENETUNREACH|08|57P0|53300)/;
/** What the driver says of a lost connection without a code. */
const AWAY_WORDS = /connection (terminated|timeout|error|ended)|timeout exceeded|not queryable/i;
/** What Kysely and the drivers say when they are used after `close()`. */
const CLOSED_WORDS = /already been destroyed|pool after calling end|database (connection )?is not open/i;
const BUSY = /^(55P03|40001|40P01)/;
const FULL = /^(53100|53200|ENOSPC)/;

type StoreCode = Extract<ConstructorParameters<typeof MoorlineError>[0], `${string}_STORE_${string}`>;

/**
 * Whatever a driver threw as a MoorlineError. `details.outcomeUnknown` is true only where a write may have been done although its
 * answer did not come: the caller must look before it counts on either. Never throws.
 */
export function storeError(error: unknown): MoorlineError {
  if (isMoorlineError(error)) return error;
  const unanswered = error instanceof CommitUnanswered;
  const cause = unanswered ? error.cause : error;
  const code = storeCode(cause);
  const outcomeUnknown = unanswered && code === "MOORLINE_UPSTREAM_STORE_AWAY";
  return new MoorlineError(code, { reason: reasonOf(cause), outcomeUnknown }, { cause });
}

function storeCode(error: unknown): StoreCode {
  const code = textProperty(error, "code");
  const words = textProperty(error, "message");
  const sqlite = sqliteCode(error);
  if (CLOSED_WORDS.test(words)) return "MOORLINE_STATE_STORE_CLOSED";
  if (isSqliteBusy(error) || BUSY.test(code)) return "MOORLINE_UPSTREAM_STORE_BUSY";
  if (sqlite === SQLITE_FULL || sqlite === SQLITE_IOERR || FULL.test(code))
    return "MOORLINE_UPSTREAM_STORE_FULL";
  if (sqlite === SQLITE_CORRUPT || sqlite === SQLITE_NOTADB) return "MOORLINE_FORMAT_STORE_FILE";
  if (sqlite === null && (AWAY.test(code) || AWAY_WORDS.test(words))) {
    return "MOORLINE_UPSTREAM_STORE_AWAY";
  }
  return "MOORLINE_UPSTREAM_STORE_REFUSED";
}

/** Node puts the failures of several addresses of one host into an error without words of its own. */
function reasonOf(error: unknown): string {
  const words = ["message", "code", "name"]
    .map((name) => textProperty(error, name))
    .find((text) => text !== "");
  return words ?? (typeof error === "string" ? error : `something of type ${typeof error} was thrown`);
}

/** A property that is a text, else "": also of things that throw when they are looked at. */
function textProperty(error: unknown, name: string): string {
  try {
    const value =
      typeof error === "object" && error !== null ? (error as Record<string, unknown>)[name] : undefined;
    return typeof value === "string" ? value : "";
  } catch {
    return "";
  }
}

type Methods = Record<string, (...args: never[]) => Promise<unknown>>;

/** The same methods, with whatever they throw turned into a MoorlineError. */
export function withStoreErrors<T extends object>(methods: T): T {
  const guarded = Object.entries(methods as unknown as Methods).map(([name, method]) => [
    name,
    async (...args: never[]) => {
      try {
        return await method(...args);
      } catch (error) {
        throw storeError(error);
      }
    },
  ]);
  return Object.fromEntries(guarded) as T;
}
