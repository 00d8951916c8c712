import { NumericSketch } from "@moorline/sketch";
import { decodeSegmentBody, type RollupRow, type Store } from "@moorline/store";

export interface RolledPane {
  readonly rollups: readonly RollupRow[];
  /** Every segment that the rollups now contain. */
  readonly segmentIds: readonly number[];
  readonly slices: readonly string[];
  readonly events: number;
}

/** All segments of a pane, merged k ways for each slice and feature in the store's fixed order; one slice in memory at a time. */
export async function rollPane(
  store: Store,
  stream: string,
  paneStartMs: number,
  amended: boolean,
  rest: () => Promise<void>,
): Promise<RolledPane> {
  const slices = await store.panes.segmentSlices(stream, paneStartMs);
  const rollups: RollupRow[] = [];
  const segmentIds: number[] = [];
  let events = 0;
  for (const slice of slices) {
    const segments = await store.panes.segments(stream, paneStartMs, slice);
    const parts = new Map<string, Uint8Array[]>();
    for (const segment of segments) {
      segmentIds.push(segment.id);
      if (slice === "all") events += segment.events;
      for (const [feature, bytes] of decodeSegmentBody(segment.body)) {
        const list = parts.get(feature) ?? [];
        parts.set(feature, list);
        list.push(bytes);
      }
    }
    for (const [feature, bytes] of parts) {
      rollups.push(rollupOf("pane", paneStartMs, slice, feature, bytes, amended));
      await rest();
    }
  }
  return { rollups, segmentIds, slices, events };
}

/** One rollup from encoded sketches in order. A single one is kept to the byte. */
export function rollupOf(
  level: RollupRow["level"],
  startMs: number,
  slice: string,
  feature: string,
  parts: readonly Uint8Array[],
  amended: boolean,
): RollupRow {
  const sketches = parts.map((bytes) => NumericSketch.decode(bytes));
  const merged = sketches.length === 1 ? sketches[0]! : NumericSketch.merge(sketches);
  const body = sketches.length === 1 ? parts[0]! : merged.encode();
  return { level, startMs, slice, feature, events: merged.counts.events, amended, body };
}
