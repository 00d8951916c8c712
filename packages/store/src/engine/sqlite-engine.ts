import { mkdirSync } from "node:fs";
import { dirname } from "node:path";
import { DatabaseSync } from "@photostructure/sqlite";
import { Kysely, SqliteDialect } from "kysely";
import type { Tables } from "../schema.js";
import type { Engine } from "./engine.js";

/** How long a writer waits for another process's transaction before the store is said to be busy. */
const BUSY_TIMEOUT_MS = 10_000;

/** SQLite in one file: write-ahead log, every commit on disk before it is acknowledged. */
export function sqliteEngine(path: string): Engine {
  mkdirSync(dirname(path), { recursive: true });
  const database = new DatabaseSync(path);
  database.exec(`PRAGMA busy_timeout = ${BUSY_TIMEOUT_MS}`);
  database.exec("PRAGMA journal_mode = WAL");
  database.exec("PRAGMA synchronous = FULL");
  database.exec("PRAGMA foreign_keys = ON");
  const db = new Kysely<Tables>({ dialect: new SqliteDialect({ database: forKysely(database) }) });
  return {
    kind: "sqlite",
    db,
    types: { blob: "blob", id: "integer" },
    // A table is written first, so the write lock is held before the version is read.
    migrateAlone: (run) => db.transaction().execute(run),
    close: () => db.destroy(),
  };
}

type KyselySqlite = Exclude<ConstructorParameters<typeof SqliteDialect>[0]["database"], () => unknown>;

/** The few methods that Kysely's dialect asks for, over the interface of Node's own `node:sqlite`. */
function forKysely(database: InstanceType<typeof DatabaseSync>): KyselySqlite {
  type Values = (null | number | bigint | string | Uint8Array)[];
  return {
    prepare: (sql: string) => {
      const statement = database.prepare(sql);
      return {
        reader: statement.columns().length > 0,
        all: (parameters: readonly unknown[]) => statement.all(...(parameters as Values)),
        run: (parameters: readonly unknown[]) => statement.run(...(parameters as Values)),
        iterate: (parameters: readonly unknown[]) =>
          statement.iterate(...(parameters as Values)) as IterableIterator<unknown>,
      };
    },
    close: () => database.close(),
  } as KyselySqlite;
}
