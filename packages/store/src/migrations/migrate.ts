import { MoorlineError } from "@moorline/errors";
import { sql } from "kysely";
import type { Engine } from "../engine/engine.js";
import { initialTables } from "./0001-initial-tables.js";
import type { Migration } from "./migration.js";

/** In order; a migration that has landed is never changed, a new one is added. */
const MIGRATIONS: readonly Migration[] = [initialTables];

/**
 * Brings the schema to this version's, each migration with its number in one transaction. Safe from several processes at once.
 *
 * @throws MOORLINE_STATE_STORE_NEWER when the store was written by a newer Moorline
 */
export async function migrate(engine: Engine): Promise<void> {
  await engine.migrateAlone(async (transaction) => {
    await sql`CREATE TABLE IF NOT EXISTS schema_version (version integer NOT NULL)`.execute(transaction);
    // A write before the read: SQLite then holds its write lock, so that no other process reads the same version.
    await sql`DELETE FROM schema_version WHERE version < 0`.execute(transaction);
    const { rows } = await sql<{ version: number }>`SELECT version FROM schema_version`.execute(transaction);
    const found = rows[0]?.version ?? 0;
    if (found > MIGRATIONS.length) {
      throw new MoorlineError("MOORLINE_STATE_STORE_NEWER", { found, known: MIGRATIONS.length });
    }
    for (const migration of MIGRATIONS.slice(found)) await migration(transaction, engine.types);
    if (found === 0)
      await sql`INSERT INTO schema_version (version) VALUES (${MIGRATIONS.length})`.execute(transaction);
    else await sql`UPDATE schema_version SET version = ${MIGRATIONS.length}`.execute(transaction);
  });
}
