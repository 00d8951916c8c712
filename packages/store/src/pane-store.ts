import type { Kysely } from "kysely";
import type { Engine } from "./engine/engine.js";
import { inOrder } from "./in-order.js";
import type { RollupTable, Tables } from "./schema.js";
import type { PaneStore, RollupLevel, RollupRow } from "./store.js";

/** Panes: segments that wait for their rollup, and rollups. */
export function paneStore({ db }: Engine): PaneStore {
  return {
    pendingPanes: async (stream) => {
      const rows = await db
        .selectFrom("segment_pending")
        .select((eb) => [
          "pane_start_ms",
          eb.fn.countAll<number>().as("segments"),
          eb
            .exists(
              eb
                .selectFrom("rollup")
                .select("start_ms")
                .where("rollup.stream", "=", stream)
                .where("rollup.level", "=", "pane")
                .whereRef("rollup.start_ms", "=", "segment_pending.pane_start_ms"),
            )
            .as("rolled_up"),
        ])
        .where("stream", "=", stream)
        .groupBy("pane_start_ms")
        .orderBy("pane_start_ms")
        .execute();
      return rows.map((row) => ({
        paneStartMs: row.pane_start_ms,
        segments: Number(row.segments),
        // True on PostgreSQL, 1 on SQLite.
        rolledUp: Boolean(row.rolled_up),
      }));
    },

    segmentSlices: async (stream, paneStartMs) => {
      const rows = await db
        .selectFrom("segment")
        .select("slice")
        .distinct()
        .where("stream", "=", stream)
        .where("pane_start_ms", "=", paneStartMs)
        .execute();
      return allFirst(rows.map((row) => row.slice));
    },

    segments: async (stream, paneStartMs, slice) => {
      let select = db
        .selectFrom("segment")
        .innerJoin("segment_set", "segment_set.id", "segment.set_id")
        .select(["segment.id", "segment.slice", "segment.events", "segment.body"])
        .select([
          "segment_set.topic",
          "segment_set.partition",
          "segment_set.from_offset",
          "segment_set.to_offset",
        ])
        .where("segment.stream", "=", stream)
        .where("segment.pane_start_ms", "=", paneStartMs);
      if (slice !== undefined) select = select.where("segment.slice", "=", slice);
      const rows = inOrder(await select.execute(), (row) => [
        row.topic,
        row.partition,
        row.from_offset,
        row.slice,
        row.id,
      ]);
      return rows.map((row) => ({
        id: row.id,
        slice: row.slice,
        topic: row.topic,
        partition: row.partition,
        fromOffset: row.from_offset,
        toOffset: row.to_offset,
        events: row.events,
        body: row.body,
      }));
    },

    rollups: async (query) => {
      let select = db
        .selectFrom("rollup")
        .selectAll()
        .where("stream", "=", query.stream)
        .where("level", "=", query.level)
        .where("start_ms", ">=", query.fromMs)
        .where("start_ms", "<", query.toMs);
      if (query.slice !== undefined) select = select.where("slice", "=", query.slice);
      if (query.feature !== undefined) select = select.where("feature", "=", query.feature);
      const rows = await select.execute();
      return inOrder(rows, (row) => [row.start_ms, row.slice, row.feature]).map(rollupRow);
    },

    slices: async (stream) => {
      const rows = await db.selectFrom("stream_slice").select("slice").where("stream", "=", stream).execute();
      return allFirst(rows.map((row) => row.slice));
    },

    extent: async (stream) => {
      const firstPaneMs = await endOfPanes(db, stream, "asc");
      const lastPaneMs = await endOfPanes(db, stream, "desc");
      return firstPaneMs === null || lastPaneMs === null ? null : { firstPaneMs, lastPaneMs };
    },
  };
}

/** The first or last pane with a rollup, from one end of the index: a minimum and maximum together would read all of it. */
async function endOfPanes(db: Kysely<Tables>, stream: string, order: "asc" | "desc"): Promise<number | null> {
  const rollups = db
    .selectFrom("rollup")
    .select("start_ms")
    .where("stream", "=", stream)
    .where("level", "=", "pane");
  const row = await rollups.orderBy("start_ms", order).limit(1).executeTakeFirst();
  return row === undefined ? null : row.start_ms;
}

/** `all` first, then by name. */
function allFirst(slices: readonly string[]): readonly string[] {
  return inOrder(slices, (slice) => [slice === "all" ? 0 : 1, slice]);
}

function rollupRow(row: RollupTable): RollupRow {
  return {
    level: row.level as RollupLevel,
    startMs: row.start_ms,
    slice: row.slice,
    feature: row.feature,
    events: row.events,
    amended: row.amended === 1,
    body: row.body,
  };
}
