import { loadHeldFeature, sideOfSketch } from "@moorline/baseline";
import type { FeatureConfig, StreamConfig } from "@moorline/config";
import { countWindow, findOnset, type OnsetAnswer, type OnsetWindow } from "@moorline/stats";
import type { Store } from "@moorline/store";
import { readRange } from "@moorline/windows";
import { activeBaselineId } from "./active-baseline.js";
import type { TimeRange } from "./read-pairs.js";
import { rollupRows } from "./rollup-rows.js";
import { valueInUnit } from "./value-in-unit.js";

export interface OnsetRequest {
  readonly store: Store;
  readonly stream: StreamConfig;
  readonly feature: FeatureConfig;
  readonly slice: string;
  /** Null: the last day that is closed. */
  readonly range: TimeRange | null;
  readonly baseline: string | null;
}

/** Since when a feature is different from its baseline. */
export interface FeatureOnset {
  readonly stream: string;
  readonly feature: string;
  readonly slice: string;
  readonly window: { readonly from: string; readonly to: string };
  readonly baseline: { readonly id: string; readonly slice: string };
  /** Length of the windows that were looked through, and how many had values. */
  readonly windowMs: number;
  readonly windows: number;
  readonly found: boolean;
  /** When it began; null where nothing is found. */
  readonly at: string | null;
  /** About 95 %; `earlier`: it may have begun before the range. */
  readonly interval: { readonly from: string; readonly to: string; readonly earlier: boolean } | null;
  readonly rank: number | null;
  readonly expected: number | null;
  readonly observed: number | null;
  readonly sentence: string;
}

const DAY_MS = 86_400_000;
/** Most windows that are looked through. */
const MOST_WINDOWS = 480;

/** Looks through the panes of a range, grouped where they are many. Counts are exact where they were counted for this baseline. */
export async function readOnset(request: OnsetRequest): Promise<FeatureOnset> {
  const { store, stream, feature, slice } = request;
  const progress = await store.evaluations.progress(stream.name);
  const closedThroughMs = progress?.closedThroughMs ?? 0;
  const range = request.range ?? { fromMs: closedThroughMs - DAY_MS, toMs: closedThroughMs };
  const id = await activeBaselineId(store, stream, request.baseline);
  const { held, slice: baselineSlice } = await loadHeldFeature(store, id, slice, feature.name);
  const panes = Math.max(1, Math.ceil((range.toMs - range.fromMs) / stream.paneMs));
  const windowMs = Math.ceil(panes / MOST_WINDOWS) * stream.paneMs;
  const fromMs = Math.floor(range.fromMs / windowMs) * windowMs;
  const reader = await rollupRows(store, {
    stream: stream.name,
    slice,
    feature: feature.name,
    fromMs,
    toMs: range.toMs,
  });
  const windows: OnsetWindow[] = [];
  for (let startMs = fromMs; startMs < range.toMs; startMs += windowMs) {
    const endMs = Math.min(startMs + windowMs, range.toMs);
    const query = { stream: stream.name, feature: feature.name, slice, fromMs: startMs, toMs: endMs };
    const { sketch } = await readRange(reader, { ...query, paneMs: stream.paneMs, closedThroughMs });
    if (sketch === null) continue;
    const counts = countWindow(held.side, sideOfSketch(sketch));
    windows.push({ startMs, endMs, n: counts.finite, atOrBelow: counts.atOrBelow });
  }
  const values = windows.reduce((sum, { n }) => sum + n, 0);
  const { designEffect } = held.dependence(windowMs, values / Math.max(1, windows.length));
  const tolerance = held.tolerance(DAY_MS);
  const expected = held.counts.thresholds.map((_, share) => tolerance.expected(share, null));
  const found =
    expected.length === 0
      ? ({ found: false, reason: "the baseline has no values" } as const)
      : findOnset({ windows, expected, designEffect });
  return {
    stream: stream.name,
    feature: feature.name,
    slice,
    window: { from: iso(fromMs), to: iso(range.toMs) },
    baseline: { id, slice: baselineSlice },
    windowMs,
    windows: windows.filter(({ n }) => n > 0).length,
    ...told(found, held.counts.thresholds, feature.unit),
  };
}

function told(
  answer: OnsetAnswer,
  thresholds: readonly number[],
  unit: string | null,
): Pick<FeatureOnset, "found" | "at" | "interval" | "rank" | "expected" | "observed" | "sentence"> {
  if (!answer.found) {
    const nothing = { at: null, interval: null, rank: null, expected: null, observed: null };
    return { found: false, ...nothing, sentence: answer.reason };
  }
  const { atMs, interval, mayBeEarlier, rank, expected, observed } = answer;
  const within =
    interval.fromMs === interval.toMs
      ? ""
      : ` (between ${minute(interval.fromMs)} and ${minute(interval.toMs)})`;
  const begun = mayBeEarlier
    ? `since ${minute(interval.toMs)} at the latest, perhaps before the range`
    : `since ${minute(atMs)}${within}`;
  const percent = (share: number) => `${Number((100 * share).toPrecision(3))} %`;
  const threshold = valueInUnit(thresholds, rank, unit);
  return {
    found: true,
    at: iso(atMs),
    interval: { from: iso(interval.fromMs), to: iso(interval.toMs), earlier: mayBeEarlier },
    rank,
    expected,
    observed,
    sentence: `${begun} UTC: ${percent(observed)} of values lie at or below ${threshold}, where the baseline has ${percent(expected)}`,
  };
}

function iso(ms: number): string {
  return new Date(ms).toISOString();
}

function minute(ms: number): string {
  return iso(ms).slice(0, 16).replace("T", " ");
}
