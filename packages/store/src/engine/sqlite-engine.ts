import { mkdirSync } from "node:fs";
import { dirname } from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { DatabaseSync } from "@photostructure/sqlite";
import { type Driver, Kysely, SqliteDialect, type TransactionSettings } from "kysely";
import type { Tables } from "../schema.js";
import type { Engine } from "./engine.js";
import { EventLoopTurn } from "./event-loop-turn.js";
import { isSqliteBusy } from "./sqlite-code.js";
import { StoreDriver } from "./store-driver.js";

/** How long a writer waits for other processes' transactions before the store is said to be busy. */
const BUSY_PATIENCE_MS = 10_000;

/** How long SQLite itself waits; it holds up the whole process meanwhile, so the rest of the patience is slept. */
const BUSY_TIMEOUT_MS = 100;

const MEMORY = ":memory:";
const OPEN_STEP_MS = 20;

type Database = InstanceType<typeof DatabaseSync>;
type KyselySqlite = Exclude<ConstructorParameters<typeof SqliteDialect>[0]["database"], () => unknown>;

/** SQLite in one file: write-ahead log, every commit on disk before it is acknowledged. */
export async function sqliteEngine(
  path: string,
  options: { readonly busyPatienceMs?: number } = {},
): Promise<Engine> {
  const busyPatienceMs = options.busyPatienceMs ?? BUSY_PATIENCE_MS;
  if (path !== MEMORY) mkdirSync(dirname(path), { recursive: true });
  const database = new DatabaseSync(path, { timeout: BUSY_TIMEOUT_MS, enableForeignKeyConstraints: true });
  try {
    await useWriteAheadLog(database, busyPatienceMs);
  } catch (error) {
    database.close();
    throw error;
  }
  const db = new Kysely<Tables>({ dialect: new StoreSqliteDialect(forKysely(database), busyPatienceMs) });
  // The connection is handed over at the first query, and only then closed with Kysely.
  await db.connection().execute(async () => {});
  return {
    kind: "sqlite",
    db,
    types: { blob: "blob", id: "integer" },
    migrateAlone: (run) => db.transaction().execute(run),
    close: () => db.destroy(),
  };
}

/** The change to a write-ahead log needs the file alone for a moment, and SQLite does not wait for that by itself. */
async function useWriteAheadLog(database: Database, patienceMs: number): Promise<void> {
  const until = performance.now() + patienceMs;
  for (;;) {
    try {
      database.exec("PRAGMA journal_mode = WAL");
      database.exec("PRAGMA synchronous = FULL");
      return;
    } catch (error) {
      if (!isSqliteBusy(error) || performance.now() > until) throw error;
      await sleep(OPEN_STEP_MS);
    }
  }
}

class StoreSqliteDialect extends SqliteDialect {
  readonly #busyPatienceMs: number;

  constructor(database: KyselySqlite, busyPatienceMs: number) {
    super({ database });
    this.#busyPatienceMs = busyPatienceMs;
  }

  override createDriver(): Driver {
    return new StoreDriver(super.createDriver(), {
      beginSql,
      isBusy: isSqliteBusy,
      busyPatienceMs: this.#busyPatienceMs,
      turn: new EventLoopTurn(),
    });
  }
}

/** A writer takes the write lock at once: one that reads first cannot get it any more when another process wrote meanwhile. */
function beginSql(settings: TransactionSettings): string {
  return settings.accessMode === "read only" ? "begin" : "begin immediate";
}

/** The few methods that Kysely's dialect asks for, over the interface of Node's own `node:sqlite`. */
function forKysely(database: Database): KyselySqlite {
  const statements = new StatementCache(database);
  return { prepare: (sql: string) => statements.get(sql), close: () => database.close() } as KyselySqlite;
}

type Statement = ReturnType<KyselySqlite["prepare"]>;
const MOST_STATEMENTS = 200;

/** Prepared statements by their text, oldest use out first. The store never has two of one text open at once. */
class StatementCache {
  readonly #database: Database;
  readonly #statements = new Map<string, Statement>();

  constructor(database: Database) {
    this.#database = database;
  }

  get(sql: string): Statement {
    const statement = this.#statements.get(sql) ?? this.#prepare(sql);
    this.#statements.delete(sql);
    this.#statements.set(sql, statement);
    if (this.#statements.size > MOST_STATEMENTS) {
      this.#statements.delete(this.#statements.keys().next().value!);
    }
    return statement;
  }

  #prepare(sql: string): Statement {
    type Values = (null | number | bigint | string | Uint8Array)[];
    const statement = this.#database.prepare(sql);
    return {
      reader: statement.columns().length > 0,
      all: (parameters: readonly unknown[]) => statement.all(...(parameters as Values)),
      run: (parameters: readonly unknown[]) => statement.run(...(parameters as Values)),
      // After a failed iteration the driver answers the next call with a row that was never written.
      iterate: () => {
        throw new Error("the store reads in pages, not in streams");
      },
    } as Statement;
  }
}
