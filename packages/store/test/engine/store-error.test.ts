import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import type { MoorlineError } from "@moorline/errors";
import { DatabaseSync } from "@photostructure/sqlite";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { CommitUnanswered } from "../../src/engine/commit-unanswered.js";
import { storeError } from "../../src/engine/store-error.js";
import { openStore } from "../../src/index.js";
import { CLAIM } from "../store-parts.js";

let folder: string;
let path: string;

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), "moorline-errors-"));
  path = join(folder, "moorline.db");
});
afterEach(() => rmSync(folder, { recursive: true, force: true }));

async function failureOf(promise: Promise<unknown>): Promise<MoorlineError> {
  return promise.then(
    () => {
      throw new Error("it did not fail");
    },
    (error: unknown) => error as MoorlineError,
  );
}

/** Runs a statement until it fails, the way the store runs one of its kind. */
function failureOfAll(statement: ReturnType<InstanceType<typeof DatabaseSync>["prepare"]>): unknown {
  try {
    for (;;) {
      if (statement.columns().length > 0) statement.all();
      else statement.run();
    }
  } catch (error) {
    return error;
  }
}

/** An error with a driver's code. */
function coded(code: string, message = "no words"): Error {
  return Object.assign(new Error(message), { code });
}

describe("storeError", () => {
  it("of a database that another process holds is busy and retryable, and the store works on afterwards", async () => {
    const store = await openStore({ kind: "sqlite", path }, { busyPatienceMs: 50 });
    const holder = new DatabaseSync(path);
    holder.exec("BEGIN IMMEDIATE");
    const failure = await failureOf(store.ingest.claimPartition(CLAIM));
    expect(failure).toMatchObject({
      code: "MOORLINE_UPSTREAM_STORE_BUSY",
      retryable: true,
      details: { outcomeUnknown: false },
    });
    expect(failure.hint).toContain("long transaction");
    holder.exec("ROLLBACK");
    holder.close();
    expect((await store.ingest.claimPartition(CLAIM)).epoch).toBe(1);
    await store.close();
  });

  it("of SQLite without space is full and retryable", () => {
    const database = new DatabaseSync(path);
    database.exec("CREATE TABLE t (body blob); PRAGMA max_page_count = 4");
    // With RETURNING the driver gives no code, without it does: both must be known.
    for (const returning of ["", " RETURNING 1"]) {
      const insert = database.prepare(`INSERT INTO t VALUES (zeroblob(3000))${returning}`);
      expect(storeError(failureOfAll(insert))).toMatchObject({
        code: "MOORLINE_UPSTREAM_STORE_FULL",
        retryable: true,
      });
    }
    database.close();
  });

  it("of a file that is no database is a FORMAT error, of a folder a refusal", async () => {
    writeFileSync(path, "cargo_temp,4.5\n".repeat(400));
    expect(await failureOf(openStore({ kind: "sqlite", path }))).toMatchObject({
      code: "MOORLINE_FORMAT_STORE_FILE",
      retryable: false,
    });
    mkdirSync(join(folder, "folder"));
    expect(await failureOf(openStore({ kind: "sqlite", path: join(folder, "folder") }))).toMatchObject({
      code: "MOORLINE_UPSTREAM_STORE_REFUSED",
      retryable: false,
    });
  });

  it("of a store that a newer Moorline wrote says which versions", async () => {
    await (await openStore({ kind: "sqlite", path })).close();
    const database = new DatabaseSync(path);
    database.exec("UPDATE schema_version SET version = 99");
    database.close();
    expect(await failureOf(openStore({ kind: "sqlite", path }))).toMatchObject({
      code: "MOORLINE_STATE_STORE_NEWER",
      details: { found: 99 },
    });
  });

  it("knows PostgreSQL's and Node's codes", () => {
    const table = [
      ["ECONNREFUSED", "MOORLINE_UPSTREAM_STORE_AWAY", true],
      ["ECONNRESET", "MOORLINE_UPSTREAM_STORE_AWAY", true],
      ["57P01", "MOORLINE_UPSTREAM_STORE_AWAY", true],
      ["57P03", "MOORLINE_UPSTREAM_STORE_AWAY", true],
      ["08006", "MOORLINE_UPSTREAM_STORE_AWAY", true],
      ["53300", "MOORLINE_UPSTREAM_STORE_AWAY", true],
      ["40001", "MOORLINE_UPSTREAM_STORE_BUSY", true],
      ["40P01", "MOORLINE_UPSTREAM_STORE_BUSY", true],
      ["53100", "MOORLINE_UPSTREAM_STORE_FULL", true],
      ["ENOSPC", "MOORLINE_UPSTREAM_STORE_FULL", true],
      ["28P01", "MOORLINE_UPSTREAM_STORE_REFUSED", false],
      ["42501", "MOORLINE_UPSTREAM_STORE_REFUSED", false],
    ] as const;
    for (const [code, expected, retryable] of table) {
      expect(storeError(coded(code)), code).toMatchObject({ code: expected, retryable });
    }
    const lost = new Error("Connection terminated unexpectedly");
    expect(storeError(lost).code).toBe("MOORLINE_UPSTREAM_STORE_AWAY");
  });

  it("says that an outcome is unknown only for a write that lost its connection", () => {
    const unknown = (error: unknown) => storeError(error).details["outcomeUnknown"];
    expect(unknown(new CommitUnanswered(coded("ECONNRESET")))).toBe(true);
    expect(unknown(coded("ECONNRESET"))).toBe(false);
    expect(unknown(new CommitUnanswered(coded("23505")))).toBe(false);
  });

  it("never throws, whatever was thrown, and has words for it", () => {
    const hostile = {
      get message(): string {
        throw new Error("not to be looked at");
      },
    };
    for (const thrown of [null, undefined, "text", 7, {}, Object.create(null), Symbol("s"), hostile]) {
      const error = storeError(thrown);
      expect(error.code).toBe("MOORLINE_UPSTREAM_STORE_REFUSED");
      expect(String(error.details["reason"]).length).toBeGreaterThan(0);
    }
    const refusedTwice = Object.assign(new AggregateError([]), { code: "ECONNREFUSED" });
    expect(storeError(refusedTwice).details["reason"]).toBe("ECONNREFUSED");
  });
});
