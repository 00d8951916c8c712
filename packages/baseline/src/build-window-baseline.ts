import type { StreamConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import { NumericSketch } from "@moorline/sketch";
import type { BaselinePart, RollupRow, Store } from "@moorline/store";
import { type BaselineManifest, type FrozenValues, MANIFEST_FORMAT } from "./baseline-manifest.js";
import { BASELINE_COMPRESSION, BLOCK_COMPRESSION, type BuiltBaseline, recordOf } from "./build-baseline.js";
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

const MOST_BLOCKS = 200;

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
  const gathered = new Gathered();
  for (const slice of await store.panes.slices(stream.name)) {
    for (const { name } of stream.features) {
      const rows = await panesOf(request, slice, name);
      gathered.take(slice, name, rows, (startMs) => Math.floor((startMs - fromMs) / blockMs));
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

  take(
    slice: string,
    feature: string,
    rows: readonly RollupRow[],
    blockOf: (startMs: number) => number,
  ): void {
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
    this.#keep(this.thresholds, slice, feature, thresholdValues(whole));
    this.#keep(this.atoms, slice, feature, atomValues(whole));
    this.parts.push({ slice, feature, block: -1, body });
    for (const [block, members] of groupBy(sketches, (_, i) => blockOf(rows[i]!.startMs))) {
      const merged = NumericSketch.merge(members, { compression: BLOCK_COMPRESSION });
      this.parts.push({ slice, feature, block, body: merged.encode() });
    }
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

function groupBy<T>(items: readonly T[], keyOf: (item: T, index: number) => number): Map<number, T[]> {
  const groups = new Map<number, T[]>();
  for (const [index, item] of items.entries()) {
    const key = keyOf(item, index);
    const group = groups.get(key);
    if (group === undefined) groups.set(key, [item]);
    else group.push(item);
  }
  return groups;
}
