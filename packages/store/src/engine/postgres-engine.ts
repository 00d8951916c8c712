import { Kysely, PostgresDialect, sql } from "kysely";
import pg from "pg";
import type { Tables } from "../schema.js";
import type { Engine } from "./engine.js";

const INT8 = 20;
const NUMERIC = 1_700;
/** Any number will do, as long as every Moorline takes the same. */
const MIGRATION_LOCK = 7_460_001;

/** PostgreSQL through a small pool. Offsets, times and counts are safe integers, so they are read as numbers. */
export function postgresEngine(url: string): Engine {
  const pool = new pg.Pool({
    connectionString: url,
    max: 8,
    connectionTimeoutMillis: 10_000,
    types: {
      getTypeParser: (oid: number, format?: "text" | "binary") =>
        oid === INT8 || oid === NUMERIC ? Number : pg.types.getTypeParser(oid, format as "text"),
    } as pg.CustomTypesConfig,
  });
  // An idle connection that breaks is replaced by the pool; the next query that needs it says so itself.
  pool.on("error", () => {});
  const db = new Kysely<Tables>({ dialect: new PostgresDialect({ pool }) });
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
