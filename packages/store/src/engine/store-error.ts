import { isMoorlineError, MoorlineError } from "@moorline/errors";

const SQLITE_BUSY = 5;
const SQLITE_LOCKED = 6;
const SQLITE_IOERR = 10;
const SQLITE_FULL = 13;
const SQLITE_CANTOPEN = 14;

/** Node's and PostgreSQL's words for a server that is not there, goes away or has no place left for us. */
const AWAY = /^(ECONN|EPIPE|ETIMEDOUT|ENOTFOUND|EAI_AGAIN|EHOSTUNREACH|ENETUNREACH|08|57P0|53300)/;
const BUSY = /^(55P03|40001|40P01)/;
const FULL = /^(53100|53200|ENOSPC)/;

/** Whatever a driver threw as a MoorlineError of category UPSTREAM. Never throws. */
export function storeError(error: unknown): MoorlineError {
  if (isMoorlineError(error)) return error;
  const reason = error instanceof Error ? error.message || error.name : String(error);
  const details = { reason, outcomeUnknown: false };
  const code = textProperty(error, "code");
  const sqlite = sqliteCode(error);
  if (sqlite === SQLITE_BUSY || sqlite === SQLITE_LOCKED || BUSY.test(code)) {
    return new MoorlineError("MOORLINE_UPSTREAM_STORE_BUSY", details, { cause: error });
  }
  if (sqlite === SQLITE_FULL || sqlite === SQLITE_IOERR || FULL.test(code)) {
    return new MoorlineError("MOORLINE_UPSTREAM_STORE_FULL", details, { cause: error });
  }
  // A connection lost during COMMIT leaves open whether it happened: the caller must look before it writes again.
  if (
    sqlite === SQLITE_CANTOPEN ||
    AWAY.test(code) ||
    /connection (terminated|timeout)|timeout exceeded/i.test(reason)
  ) {
    return new MoorlineError(
      "MOORLINE_UPSTREAM_STORE_AWAY",
      { ...details, outcomeUnknown: true },
      { cause: error },
    );
  }
  return new MoorlineError("MOORLINE_UPSTREAM_STORE_REFUSED", details, { cause: error });
}

function textProperty(error: unknown, name: string): string {
  const value =
    typeof error === "object" && error !== null ? (error as Record<string, unknown>)[name] : undefined;
  return typeof value === "string" ? value : "";
}

/** The primary result code: the low byte of SQLite's extended one. */
function sqliteCode(error: unknown): number | null {
  if (typeof error !== "object" || error === null) return null;
  const { errcode, sqliteCode } = error as Record<string, unknown>;
  const code = typeof errcode === "number" ? errcode : sqliteCode;
  return typeof code === "number" ? code & 0xff : null;
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
