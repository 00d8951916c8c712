import type { Kysely, Transaction } from "kysely";
import type { Tables } from "../schema.js";

/** A database that holds the tables. Only here do SQLite and PostgreSQL differ. */
export interface Engine {
  readonly kind: "sqlite" | "postgres";
  readonly db: Kysely<Tables>;
  /** Column types that differ. */
  readonly types: { readonly blob: "blob" | "bytea"; readonly id: "integer" | "bigserial" };
  /** Runs alone among all processes that migrate this store. */
  migrateAlone(run: (transaction: Transaction<Tables>) => Promise<void>): Promise<void>;
  close(): Promise<void>;
}
