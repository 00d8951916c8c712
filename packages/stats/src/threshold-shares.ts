import type { CdfView } from "./cdf-view.js";
import { effectiveEvents } from "./effective-events.js";
import { eventsAt } from "./events-at.js";
import { freezeThresholds, type Threshold } from "./freeze-thresholds.js";
import { FROZEN_RANKS } from "./grid-ranks.js";
import type { NumericSide, ThresholdCounts } from "./numeric-side.js";
import { signedRootDeviance } from "./signed-root-deviance.js";

/** Expected and observed share of values at or below one frozen threshold. */
export interface ThresholdShare {
  /** The frozen rank that the threshold was taken at. */
  readonly rank: number;
  /** The threshold, in the feature's unit. */
  readonly value: number;
  /** The baseline's share, smoothed: (count + ½)/(n + 1), so that it is never 0 or 1. */
  readonly expected: number;
  /** Production's share. */
  readonly observed: number;
  /** Production's values at or below the threshold; not whole when read from a digest. */
  readonly events: number;
  /** Rank error of both sides to reckon with; 0 when both were counted. */
  readonly rankError: number;
  /** Signed-root deviance of the share nearest to the expected one that the rank error allows; positive: production is lower. */
  readonly z: number;
}

/** The thresholds that a side was counted with, else those frozen from its CDF. */
export function thresholdsOf(baseline: NumericSide): readonly Threshold[] {
  const counted = baseline.thresholdCounts;
  if (counted == null || counted.values.length !== FROZEN_RANKS.length) return freezeThresholds(baseline.cdf);
  return FROZEN_RANKS.map((rank, i) => ({ rank, value: counted.values[i]! }));
}

/** Values at or below a threshold: the exact count where one was kept, else read from the view. */
export function countAt(
  view: CdfView,
  value: number,
  counts: ThresholdCounts | null | undefined,
): { readonly events: number; readonly counted: boolean } {
  const kept = counts == null ? -1 : counts.values.indexOf(value);
  if (kept >= 0) return { events: counts!.counts[kept]!, counted: true };
  return { events: eventsAt(view, value).upTo, counted: view.exact };
}

/**
 * The frozen thresholds of a baseline with what was expected and what was observed at each.
 *
 * Shape   both sides hold at least one finite value; one row a frozen rank, ascending.
 * Source  docs/threshold-shares.md
 */
export function thresholdShares(baseline: NumericSide, production: NumericSide): readonly ThresholdShare[] {
  const n = baseline.cdf.n;
  const m = production.cdf.n;
  const effective = effectiveEvents(n, m);
  return thresholdsOf(baseline).map(({ rank, value }) => {
    const before = countAt(baseline.cdf, value, baseline.thresholdCounts);
    const now = countAt(production.cdf, value, production.thresholdCounts);
    const rankError =
      (before.counted ? 0 : baseline.cdf.rankErrorAt(rank)) +
      (now.counted ? 0 : production.cdf.rankErrorAt(rank));
    const expected = (before.events + 0.5) / (n + 1);
    const observed = Math.min(1, Math.max(0, now.events / m));
    const z = signedRootDeviance(nearestTo(expected, observed, rankError), expected, effective);
    return { rank, value, expected, observed, events: now.events, rankError, z };
  });
}

/** The share nearest to `expected` among those within `error` of `observed`: what an inexact count proves at least. */
export function nearestTo(expected: number, observed: number, error: number): number {
  if (Math.abs(observed - expected) <= error) return expected;
  return observed > expected ? observed - error : observed + error;
}

/** From this share of the baseline on the lowest threshold is an atom: such values are counted apart, exactly. */
const ATOM_SHARE = 0.01;

/** Events of a baseline strictly below its lowest threshold; null where no atom stands there, for then the threshold's own share sees them. */
export function belowLowestEvents(baseline: NumericSide): number | null {
  const lowest = thresholdsOf(baseline)[0];
  if (lowest === undefined) return null;
  const { below, upTo } = eventsAt(baseline.cdf, lowest.value);
  return upTo - below >= ATOM_SHARE * baseline.cdf.n ? below : null;
}

/** The share strictly below the lowest threshold, where an atom of the baseline stands there: what falls below it leaves every other share as it is. */
export function belowLowestShare(baseline: NumericSide, production: NumericSide): ThresholdShare | null {
  const before = belowLowestEvents(baseline);
  if (before === null || production.cdf.n === 0) return null;
  const { rank, value } = thresholdsOf(baseline)[0]!;
  const { below: events } = eventsAt(production.cdf, value);
  const expected = (before + 0.5) / (baseline.cdf.n + 1);
  const observed = events / production.cdf.n;
  // Atoms of the baseline are counted exactly in every segment, so that only what lies around them may be off.
  const rankError = production.cdf.exact ? 0 : production.cdf.rankErrorAt(Math.min(observed, 0.5));
  const effective = effectiveEvents(baseline.cdf.n, production.cdf.n);
  const z = signedRootDeviance(nearestTo(expected, observed, rankError), expected, effective);
  return { rank, value, expected, observed, events, rankError, z };
}
