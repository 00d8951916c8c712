import { createHash } from "node:crypto";
import type { Kysely } from "kysely";
import type { Engine } from "./engine/engine.js";
import type { Tables } from "./schema.js";
import type { LogbookEntry, LogbookKind, LogbookStore, LogbookWrite } from "./store.js";

export function logbookStore({ db }: Engine): LogbookStore {
  return {
    append: async (entry) => (await insertLogbook(db, entry))!,
    entries: async (query) => {
      let select = db.selectFrom("logbook").selectAll().orderBy("id", "desc").limit(query.limit);
      if (query.stream !== undefined) select = select.where("stream", "=", query.stream);
      if (query.kind !== undefined) select = select.where("kind", "=", query.kind);
      if (query.subject !== undefined) select = select.where("subject", "=", query.subject);
      if (query.fromMs !== undefined) select = select.where("at_ms", ">=", query.fromMs);
      if (query.toMs !== undefined) select = select.where("at_ms", "<", query.toMs);
      if (query.beforeId !== undefined) select = select.where("id", "<", query.beforeId);
      const rows = await select.execute();
      return rows.map(
        (row): LogbookEntry => ({
          id: row.id,
          atMs: row.at_ms,
          stream: row.stream,
          kind: row.kind as LogbookKind,
          subject: row.subject,
          sentence: row.sentence,
          detail: JSON.parse(row.detail) as unknown,
        }),
      );
    },
  };
}

/** Writes an entry and returns its id; with `once`, the same entry (all it says, and when) again changes nothing and returns null. */
export async function insertLogbook(
  db: Kysely<Tables>,
  entry: LogbookWrite,
  options: { readonly once?: boolean } = {},
): Promise<number | null> {
  const detail = JSON.stringify(entry.detail ?? null);
  const content = JSON.stringify([
    entry.atMs,
    entry.stream,
    entry.kind,
    entry.subject,
    entry.sentence,
    detail,
  ]);
  const row = await db
    .insertInto("logbook")
    .values({
      at_ms: entry.atMs,
      stream: entry.stream,
      kind: entry.kind,
      subject: entry.subject,
      sentence: entry.sentence,
      detail,
      once_key: options.once ? createHash("sha256").update(content).digest("hex") : null,
    })
    .onConflict((conflict) => conflict.column("once_key").doNothing())
    .returning("id")
    .executeTakeFirst();
  return row?.id ?? null;
}
