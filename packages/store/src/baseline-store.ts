import { MoorlineError } from "@moorline/errors";
import { checkNames } from "./check-names.js";
import type { Engine } from "./engine/engine.js";
import { bodyBytes, inChunks } from "./in-chunks.js";
import { inOrder } from "./in-order.js";
import { insertLogbook } from "./logbook-store.js";
import type { BaselineTable } from "./schema.js";
import type { BaselineRecord, BaselineStore } from "./store.js";

/** Baselines: written once, never changed. */
export function baselineStore({ db }: Engine): BaselineStore {
  return {
    put: async (baseline, parts) => {
      checkNames([baseline.stream, baseline.id]);
      for (const part of parts) checkNames([baseline.id, part.slice, part.feature]);
      return db.transaction().execute(async (transaction) => {
        const written = await transaction
          .insertInto("baseline")
          .values({
            id: baseline.id,
            stream: baseline.stream,
            created_at_ms: baseline.createdAtMs,
            created_by: baseline.createdBy,
            note: baseline.note,
            manifest: JSON.stringify(baseline.manifest),
          })
          .onConflict((conflict) => conflict.column("id").doNothing())
          .returning("id")
          .executeTakeFirst();
        if (written === undefined) return false;
        const rows = parts.map((part) => ({
          baseline_id: baseline.id,
          slice: part.slice,
          feature: part.feature,
          block: part.block,
          body: part.body,
        }));
        for (const chunk of inChunks(rows, 5, bodyBytes))
          await transaction.insertInto("baseline_part").values(chunk).execute();
        await insertLogbook(transaction, {
          atMs: baseline.createdAtMs,
          stream: baseline.stream,
          kind: "baseline-set",
          subject: baseline.id,
          sentence: `${baseline.createdBy} set baseline ${baseline.id}${baseline.note === "" ? "" : `: ${baseline.note}`}`,
          detail: { by: baseline.createdBy, note: baseline.note },
        });
        return true;
      });
    },

    list: async (stream) => {
      const rows = await db
        .selectFrom("baseline")
        .selectAll()
        .where("stream", "=", stream)
        .orderBy("created_at_ms", "desc")
        .orderBy("id")
        .execute();
      return rows.map(baselineRecord);
    },

    get: async (id) => {
      const row = await db.selectFrom("baseline").selectAll().where("id", "=", id).executeTakeFirst();
      return row === undefined ? null : baselineRecord(row);
    },

    parts: async (id, filter = {}) => {
      let select = db
        .selectFrom("baseline_part")
        .select(["slice", "feature", "block", "body"])
        .where("baseline_id", "=", id);
      if (filter.slice !== undefined) select = select.where("slice", "=", filter.slice);
      if (filter.feature !== undefined) select = select.where("feature", "=", filter.feature);
      if (filter.block !== undefined) select = select.where("block", "=", filter.block);
      return inOrder(await select.execute(), (part) => [part.slice, part.feature, part.block]);
    },

    activate: (stream, id, by, atMs) =>
      db.transaction().execute(async (transaction) => {
        const known = await transaction
          .selectFrom("baseline")
          .select("id")
          .where("id", "=", id)
          .where("stream", "=", stream)
          .executeTakeFirst();
        if (known === undefined) throw new MoorlineError("MOORLINE_STATE_UNKNOWN_BASELINE", { stream, id });
        const before = await transaction
          .selectFrom("active_baseline")
          .select("baseline_id")
          .where("stream", "=", stream)
          .executeTakeFirst();
        if (before?.baseline_id === id) return;
        await transaction
          .insertInto("active_baseline")
          .values({ stream, baseline_id: id, since_ms: atMs })
          .onConflict((conflict) =>
            conflict.column("stream").doUpdateSet({ baseline_id: id, since_ms: atMs }),
          )
          .execute();
        await insertLogbook(transaction, {
          atMs,
          stream,
          kind: "baseline-activated",
          subject: id,
          sentence: `${by} made ${id} the active baseline${before === undefined ? "" : ` in place of ${before.baseline_id}`}`,
          detail: { by, before: before?.baseline_id ?? null },
        });
      }),

    active: async (stream) => {
      const row = await db
        .selectFrom("active_baseline")
        .selectAll()
        .where("stream", "=", stream)
        .executeTakeFirst();
      return row === undefined ? null : { baselineId: row.baseline_id, sinceMs: row.since_ms };
    },
  };
}

function baselineRecord(row: BaselineTable): BaselineRecord {
  return {
    id: row.id,
    stream: row.stream,
    createdAtMs: row.created_at_ms,
    createdBy: row.created_by,
    note: row.note,
    manifest: JSON.parse(row.manifest) as unknown,
  };
}
