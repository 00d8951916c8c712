import { type Driver, Kysely, PostgresDialect, sql } from "kysely";
import pg from "pg";
import type { Tables } from "../schema.js";
import type { Engine } from "./engine.js";
import { StoreDriver } from "./store-driver.js";

const INT8 = 20;
const NUMERIC = 1_700;
const MOST_CONNECTIONS = 8;
const CONNECT_TIMEOUT_MS = 10_000;
/** Any number will do, as long as every Moorline takes the same. */
const MIGRATION_LOCK = 7_460_001;

/** PostgreSQL through a small pool. Offsets, times and counts are safe integers, so they are read as numbers. */
export function postgresEngine(url: string): Engine {
  const pool = new pg.Pool({
    connectionString: url,
    application_name: "moorline",
    max: MOST_CONNECTIONS,
    connectionTimeoutMillis: CONNECT_TIMEOUT_MS,
    keepAlive: true,
    types: {
      getTypeParser: (oid: number, format?: "text" | "binary") =>
        oid === INT8 || oid === NUMERIC ? Number : pg.types.getTypeParser(oid, format as "text"),
    } as pg.CustomTypesConfig,
  });
  // A connection that breaks, idle or at work, tells the query that needs it; without a listener it would end the process.
  pool.on("error", ignore);
  pool.on("connect", (client) => client.on("error", ignore));
  const db = new Kysely<Tables>({ dialect: new StorePostgresDialect({ pool }) });
  return {
    kind: "postgres",
    db,
    types: { blob: "bytea", id: "bigserial" },
    migrateAlone: (run) =>
      db.transaction().execute(async (transaction) => {
        await sql`SELECT pg_advisory_xact_lock(${MIGRATION_LOCK})`.execute(transaction);
        await run(transaction);
      }),
    close: () => db.destroy(),
  };
}

class StorePostgresDialect extends PostgresDialect {
  override createDriver(): Driver {
    // The server queues writers itself; what it refuses is for the caller to try again.
    return new StoreDriver(super.createDriver(), { isBusy: () => false, busyPatienceMs: 0 });
  }
}

function ignore(): void {}
