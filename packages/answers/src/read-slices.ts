import { findBaseline, loadHeldFeature, manifestOf, sideOfSketch } from "@moorline/baseline";
import type { FeatureConfig, StreamConfig } from "@moorline/config";
import { NumericSketch } from "@moorline/sketch";
import { type SliceAnswer, type SliceSides, sliceContributions } from "@moorline/stats";
import type { Store } from "@moorline/store";
import { readRange } from "@moorline/windows";
import { activeBaselineId } from "./active-baseline.js";
import type { TimeRange } from "./read-pairs.js";

export interface SlicesRequest {
  readonly store: Store;
  readonly stream: StreamConfig;
  readonly feature: FeatureConfig;
  /** Slice key; null: the stream's first. */
  readonly key: string | null;
  readonly range: TimeRange;
  readonly baseline: string | null;
}

/** Which slice carries the change of a feature. */
export interface FeatureSlices extends SliceAnswer {
  readonly stream: string;
  readonly feature: string;
  readonly unit: string | null;
  /** Null where the stream has no slices. */
  readonly key: string | null;
  readonly window: { readonly from: string; readonly to: string };
  readonly baseline: { readonly id: string };
}

/** The slices of one key over a range, held against the baseline's, ranked by what they add to the change of the whole. */
export async function readSlices(request: SlicesRequest): Promise<FeatureSlices> {
  const { store, stream, feature, range } = request;
  const key = request.key ?? stream.slices[0]?.key ?? null;
  const id = await activeBaselineId(store, stream, request.baseline);
  const progress = await store.evaluations.progress(stream.name);
  const closedThroughMs = progress?.closedThroughMs ?? 0;
  const seen =
    key === null ? [] : (await store.panes.slices(stream.name)).filter((one) => one.startsWith(`${key}=`));
  const known = await baselineRows(request, id, key);
  const names = [...new Set([...seen, ...known.keys()])];
  const sides: SliceSides[] = [];
  const query = {
    stream: stream.name,
    feature: feature.name,
    ...range,
    paneMs: stream.paneMs,
    closedThroughMs,
  };
  let rangeMs = range.toMs - range.fromMs;
  for (const slice of names) {
    const { sketch, fromMs, toMs } = await readRange(store, { ...query, slice });
    rangeMs = toMs - fromMs;
    const production = sideOfSketch(sketch ?? new NumericSketch()).cdf;
    const found = await loadHeldFeature(store, id, slice, feature.name);
    const isOwn = found.slice === slice;
    const { cdf, events } = found.held.side;
    // A slice that is held against the whole counts with its own rows, as far as they have values.
    const rows = (known.get(slice) ?? 0) * (events === 0 ? 0 : cdf.n / events);
    const baseline = isOwn || rows > 0 ? cdf : new NumericSketch().toCdf();
    sides.push({ slice, baseline, production, ...(!isOwn && { baselineEvents: rows }) });
  }
  const all = await loadHeldFeature(store, id, "all", feature.name);
  const values = sides.reduce((sum, { production }) => sum + production.n, 0);
  const { designEffect } = all.held.dependence(rangeMs, values);
  const isEmpty = values === 0 || sides.every(({ baseline }) => baseline.n === 0);
  return {
    stream: stream.name,
    feature: feature.name,
    unit: feature.unit,
    key,
    window: { from: new Date(range.fromMs).toISOString(), to: new Date(range.toMs).toISOString() },
    baseline: { id },
    ...(isEmpty ? NOTHING : sliceContributions(sides, { designEffect: designEffect(0.5) })),
  };
}

const NOTHING: SliceAnswer = Object.freeze({
  distance: 0,
  exceedanceChange: { lower: 0, upper: 0 },
  critical: 4,
  slices: [],
  sentence: "there is nothing to compare slice by slice",
});

/** Rows of the key's slices in the baseline, those without a part of their own too. */
async function baselineRows(
  { store, stream }: SlicesRequest,
  id: string,
  key: string | null,
): Promise<ReadonlyMap<string, number>> {
  const manifest = manifestOf(await findBaseline(store, stream.name, id));
  const rows = [...manifest.slices, ...manifest.leftOutSlices];
  return new Map(
    rows
      .filter(({ slice }) => key !== null && slice.startsWith(`${key}=`))
      .map(({ slice, rows: n }) => [slice, n]),
  );
}
