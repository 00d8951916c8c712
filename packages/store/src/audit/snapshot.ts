import type { Kysely } from "kysely";
import type { Tables } from "../schema.js";

/**
 * Reads in a transaction of its own, so that what is compared was true at one moment while collectors and evaluators go on writing.
 * Kept short: a reader holds up no writer, but SQLite cannot shorten its log meanwhile.
 */
export function snapshot<T>(db: Kysely<Tables>, read: (db: Kysely<Tables>) => Promise<T>): Promise<T> {
  return db.transaction().setIsolationLevel("repeatable read").setAccessMode("read only").execute(read);
}
