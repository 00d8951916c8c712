import type { StreamConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import { NumericSketch } from "@moorline/sketch";
import { type BlockCounts, eventsAt } from "@moorline/stats";
import type { BaselinePart, RollupRow, Store } from "@moorline/store";
import { type BaselineManifest, type FrozenValues, MANIFEST_FORMAT } from "./baseline-manifest.js";
import { BLOCK_COUNTS, WHOLE } from "./baseline-parts.js";
import { encodeBlockCounts } from "./block-counts-codec.js";
import { BASELINE_COMPRESSION, type BuiltBaseline, recordOf } from "./build-baseline.js";
import { atomValues, thresholdValues } from "./freeze-values.js";
import { MOORLINE_VERSION } from "./moorline-version.js";
import { LEAST_SLICE_ROWS } from "./slice-plan.js";

export interface WindowBaselineRequest {
  readonly stream: StreamConfig;
  readonly store: Store;
  /** Panes that begin in [fromMs, toMs). */
  readonly fromMs: number;
  readonly toMs: number;
  readonly createdBy: string;
  readonly createdAtMs: number;
  readonly note?: string;
}

const MOST_BLOCKS = 4_096;

/**
 * A baseline from stored windows: what production was in a time that was good. Quantiles come from the panes' sketches, so that counts at the
 * new thresholds are read from the digest, not counted anew.
 *
 * @throws MOORLINE_INPUT_WINDOWS_NONE when no pane of the range is stored, MOORLINE_INPUT_BASELINE_EMPTY when a feature has no value
 */
export async function buildWindowBaseline(request: WindowBaselineRequest): Promise<BuiltBaseline> {
  const { stream, store, fromMs, toMs } = request;
  const extentRows = await panesOf(request, "all", stream.features[0]!.name);
  if (extentRows.length === 0) {
    const range = { from: new Date(fromMs).toISOString(), to: new Date(toMs).toISOString() };
    throw new MoorlineError("MOORLINE_INPUT_WINDOWS_NONE", { stream: stream.name, ...range });
  }
  const starts = extentRows.map(({ startMs }) => startMs);
  const panesInBlock = Math.max(1, Math.ceil((toMs - fromMs) / stream.paneMs / MOST_BLOCKS));
  const blockMs = panesInBlock * stream.paneMs;
  const extent = { startMs: fromMs, lengthMs: blockMs, count: Math.ceil((toMs - fromMs) / blockMs) };
  const gathered = new Gathered(extent);
  for (const slice of await store.panes.slices(stream.name)) {
    for (const { name } of stream.features) {
      const rows = await panesOf(request, slice, name);
      gathered.take(slice, name, rows);
    }
  }
  const features = stream.features.map(({ name, unit }) => gathered.featureOf(name, unit));
  const empty = features.filter(({ finite }) => finite === 0).map(({ name }) => name);
  if (empty.length > 0) {
    throw new MoorlineError("MOORLINE_INPUT_BASELINE_EMPTY", {
      source: "the range of windows",
      features: empty,
    });
  }
  const blocks = new Set(starts.map((startMs) => Math.floor((startMs - fromMs) / blockMs))).size;
  const manifest: BaselineManifest = {
    format: MANIFEST_FORMAT,
    moorline: MOORLINE_VERSION,
    source: { kind: "windows", fromMs, toMs, panes: starts.length },
    rows: gathered.rowsOf("all"),
    features,
    slices: gathered.slices,
    leftOutSlices: gathered.leftOut,
    blocks: {
      by: "time",
      count: blocks,
      lengthMs: blockMs,
      rowsEach: null,
      sentence: `${blocks} blocks of ${panesInBlock} panes`,
    },
    thresholds: gathered.thresholds,
    atoms: gathered.atoms,
  };
  return { record: recordOf(request, manifest, gathered.parts), parts: gathered.parts };
}

async function panesOf(
  request: WindowBaselineRequest,
  slice: string,
  feature: string,
): Promise<readonly RollupRow[]> {
  const { stream, fromMs, toMs } = request;
  return request.store.panes.rollups({ stream: stream.name, level: "pane", fromMs, toMs, slice, feature });
}

/** Merged sketches by slice and feature, and what the manifest says of them. */
class Gathered {
  readonly parts: BaselinePart[] = [];
  readonly thresholds: FrozenValues[] = [];
  readonly atoms: FrozenValues[] = [];
  readonly leftOut: { slice: string; rows: number }[] = [];
  readonly #rows = new Map<string, number>();
  readonly #whole = new Map<string, NumericSketch>();

  readonly #blocks: BlockExtent;

  constructor(blocks: BlockExtent) {
    this.#blocks = blocks;
  }

  take(slice: string, feature: string, rows: readonly RollupRow[]): void {
    if (rows.length === 0) return;
    const sketches = rows.map((row) => NumericSketch.decode(row.body));
    // Thresholds are frozen from what is kept, so that whoever reads it freezes the same ones.
    const body = NumericSketch.merge(sketches, { compression: BASELINE_COMPRESSION }).encode();
    const whole = NumericSketch.decode(body);
    const { events } = whole.counts;
    if (slice !== "all" && events < LEAST_SLICE_ROWS) {
      if (!this.leftOut.some((left) => left.slice === slice)) this.leftOut.push({ slice, rows: events });
      return;
    }
    this.#rows.set(slice, Math.max(events, this.#rows.get(slice) ?? 0));
    if (slice === "all") this.#whole.set(feature, whole);
    const thresholds = thresholdValues(whole);
    this.#keep(this.thresholds, slice, feature, thresholds);
    this.#keep(this.atoms, slice, feature, atomValues(whole));
    this.parts.push({ slice, feature, block: WHOLE, body });
    const startsMs = rows.map(({ startMs }) => startMs);
    const counts = blockCountsOf(this.#blocks, startsMs, sketches, thresholds);
    this.parts.push({ slice, feature, block: BLOCK_COUNTS, body: encodeBlockCounts(counts) });
  }

  get slices(): { slice: string; rows: number }[] {
    return [...this.#rows].map(([slice, rows]) => ({ slice, rows }));
  }

  rowsOf(slice: string): number {
    return this.#rows.get(slice) ?? 0;
  }

  featureOf(name: string, unit: string | null): BaselineManifest["features"][number] {
    const sketch = this.#whole.get(name) ?? new NumericSketch();
    const { events, finite, missing } = sketch.counts;
    const nonFinite = events - finite - missing;
    return { name, unit, column: name, events, finite, missing, nonFinite, min: sketch.min, max: sketch.max };
  }

  #keep(list: FrozenValues[], slice: string, feature: string, values: readonly number[]): void {
    if (values.length > 0) list.push({ slice, feature, values });
  }
}

interface BlockExtent {
  readonly startMs: number;
  readonly lengthMs: number;
  readonly count: number;
}

/** Counts at thresholds that the panes were not counted for are read from their digests, to the nearest whole one. */
function blockCountsOf(
  { startMs, lengthMs, count }: BlockExtent,
  startsMs: readonly number[],
  sketches: readonly NumericSketch[],
  thresholds: readonly number[],
): BlockCounts {
  const column = () => new Float64Array(count);
  const [events, missing, finite] = [column(), column(), column()];
  const atOrBelow = thresholds.map(column);
  for (const [pane, sketch] of sketches.entries()) {
    const block = Math.floor((startsMs[pane]! - startMs) / lengthMs);
    events[block]! += sketch.counts.events;
    missing[block]! += sketch.counts.missing;
    finite[block]! += sketch.counts.finite;
    if (sketch.counts.finite === 0) continue;
    const view = sketch.toCdf();
    let least = 0;
    for (const [share, threshold] of thresholds.entries()) {
      least = Math.max(least, Math.min(sketch.counts.finite, Math.round(eventsAt(view, threshold).upTo)));
      atOrBelow[share]![block]! += least;
    }
  }
  return { lengthMs, startMs, events, missing, finite, atOrBelow };
}
