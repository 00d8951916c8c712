import type { Engine } from "./engine/engine.js";
import type { RollupTable } from "./schema.js";
import type { PaneStore, RollupLevel, RollupRow } from "./store.js";

/** Panes: segments that wait for their rollup, and rollups. */
export function paneStore({ db }: Engine): PaneStore {
  return {
    pendingPanes: async (stream) => {
      const rows = await db
        .selectFrom("segment_pending")
        .select((eb) => ["pane_start_ms", eb.fn.countAll<number>().as("segments")])
        .where("stream", "=", stream)
        .groupBy("pane_start_ms")
        .orderBy("pane_start_ms")
        .execute();
      if (rows.length === 0) return [];
      const rolledUp = await db
        .selectFrom("rollup")
        .select("start_ms")
        .distinct()
        .where("stream", "=", stream)
        .where("level", "=", "pane")
        .where("start_ms", ">=", rows[0]!.pane_start_ms)
        .where("start_ms", "<=", rows.at(-1)!.pane_start_ms)
        .execute();
      const known = new Set(rolledUp.map((row) => row.start_ms));
      return rows.map((row) => ({
        paneStartMs: row.pane_start_ms,
        segments: Number(row.segments),
        rolledUp: known.has(row.pane_start_ms),
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
      const rows = await select
        .orderBy("segment_set.topic")
        .orderBy("segment_set.partition")
        .orderBy("segment_set.from_offset")
        .orderBy("segment.slice")
        .orderBy("segment.id")
        .execute();
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
      const rows = await select.orderBy("start_ms").orderBy("slice").orderBy("feature").execute();
      return rows.map(rollupRow);
    },

    slices: async (stream) => {
      const rows = await db
        .selectFrom("rollup")
        .select("slice")
        .distinct()
        .where("stream", "=", stream)
        .execute();
      return allFirst(rows.map((row) => row.slice));
    },

    extent: async (stream) => {
      const row = await db
        .selectFrom("rollup")
        .select((eb) => [eb.fn.min("start_ms").as("first"), eb.fn.max("start_ms").as("last")])
        .where("stream", "=", stream)
        .where("level", "=", "pane")
        .executeTakeFirst();
      return row?.first == null ? null : { firstPaneMs: Number(row.first), lastPaneMs: Number(row.last) };
    },
  };
}

/** `all` first, then by name. */
function allFirst(slices: readonly string[]): readonly string[] {
  return slices.toSorted((a, b) => Number(b === "all") - Number(a === "all") || (a < b ? -1 : 1));
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
