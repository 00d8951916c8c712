import { findHeldFeature, type HeldFeature, loadHeldFeature, sideOfSketch } from "@moorline/baseline";
import type { FeatureConfig, StreamConfig } from "@moorline/config";
import { NumericSketch } from "@moorline/sketch";
import type { NumericSide } from "@moorline/stats";
import type { Store } from "@moorline/store";
import { type RangeSketch, readRange } from "@moorline/windows";
import { activeBaselineId } from "./active-baseline.js";
import { compareFeature, type FeatureComparison } from "./feature-comparison.js";

export interface TimeRange {
  readonly fromMs: number;
  readonly toMs: number;
}

export interface PairsRequest {
  readonly store: Store;
  readonly stream: StreamConfig;
  readonly feature: FeatureConfig;
  /** `all` or `key=value`. */
  readonly slice: string;
  readonly range: TimeRange;
  /** Another range in place of the baseline. */
  readonly against: TimeRange | null;
  /** Id of a baseline, or the start of one; null: the active one. */
  readonly baseline: string | null;
  readonly nowMs: number;
}

/** What `moorline pairs --format json` prints: the object of compare, and what it was computed from. */
export interface PairsAnswer extends FeatureComparison {
  readonly stream: string;
  readonly unit: string | null;
  readonly window: { readonly from: string; readonly to: string };
  /** Null where another range stands in its place. `slice` is `all` where the baseline has no part for the slice asked for. */
  readonly baseline: { readonly id: string; readonly slice: string } | null;
  readonly against: { readonly from: string; readonly to: string } | null;
  /** True when late events changed a pane of a range after it was evaluated. */
  readonly amended: boolean;
  readonly generatedAt: string;
}

/** The quantile pairs of a feature and slice over a range, merged from the store's rollups. */
export async function readPairs(request: PairsRequest): Promise<PairsAnswer> {
  const { stream, feature, slice, nowMs } = request;
  const progress = await request.store.evaluations.progress(stream.name);
  const closedThroughMs = progress?.closedThroughMs ?? 0;
  const production = await rangeOf(request, request.range, closedThroughMs);
  const held = await heldAgainst(request, closedThroughMs);
  const side = sideOf(production);
  const rangeMs = production.toMs - production.fromMs;
  const dependence = held.feature?.dependence(rangeMs, side.cdf.n) ?? null;
  return {
    ...compareFeature(feature.name, slice, held.side, side, { unit: feature.unit, dependence }),
    stream: stream.name,
    unit: feature.unit,
    window: isoRange(production),
    baseline: held.baseline,
    against: held.against,
    amended: production.amended || held.amended,
    generatedAt: new Date(nowMs).toISOString(),
  };
}

interface HeldAgainst extends Pick<PairsAnswer, "baseline" | "against" | "amended"> {
  readonly side: NumericSide;
  /** The baseline that dependence is known from: also where another range stands in its place; null without one. */
  readonly feature: HeldFeature | null;
}

async function heldAgainst(request: PairsRequest, closedThroughMs: number): Promise<HeldAgainst> {
  const { store, feature, slice, against } = request;
  if (against !== null) {
    const range = await rangeOf(request, against, closedThroughMs);
    const active = await store.baselines.active(request.stream.name);
    const known =
      active === null ? null : await findHeldFeature(store, active.baselineId, slice, feature.name);
    return {
      side: sideOf(range),
      feature: known?.held ?? null,
      baseline: null,
      against: isoRange(range),
      amended: range.amended,
    };
  }
  const id = await activeBaselineId(store, request.stream, request.baseline);
  const { held, slice: heldSlice } = await loadHeldFeature(store, id, slice, feature.name);
  return {
    side: held.side,
    feature: held,
    baseline: { id, slice: heldSlice },
    against: null,
    amended: false,
  };
}

function rangeOf(request: PairsRequest, range: TimeRange, closedThroughMs: number): Promise<RangeSketch> {
  const { store, stream, feature, slice } = request;
  const query = { stream: stream.name, feature: feature.name, slice, paneMs: stream.paneMs, closedThroughMs };
  return readRange(store, { ...query, ...range });
}

function sideOf(range: RangeSketch): NumericSide {
  return sideOfSketch(range.sketch ?? new NumericSketch());
}

function isoRange({ fromMs, toMs }: TimeRange): { readonly from: string; readonly to: string } {
  return { from: new Date(fromMs).toISOString(), to: new Date(toMs).toISOString() };
}
