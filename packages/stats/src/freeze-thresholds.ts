import type { CdfView } from "./cdf-view.js";
import { FROZEN_RANKS } from "./grid-ranks.js";
import { quantileOf } from "./quantile-of.js";

/** A baseline value whose exceedance is counted exactly in every segment. */
export interface Threshold {
  readonly rank: number;
  readonly value: number;
}

/**
 * The 11 thresholds of a baseline: its quantiles at the frozen ranks.
 *
 * Shape   ascending in rank and, not strictly, in value: with a heavy atom several ranks share one value.
 * Edges   thresholds of an empty baseline do not exist: an empty list.
 *
 * @example freezeThresholds(cdfOf([7])).length // => 11
 */
export function freezeThresholds(baseline: CdfView): readonly Threshold[] {
  if (baseline.n === 0) return [];
  return FROZEN_RANKS.map((rank) => ({ rank, value: quantileOf(baseline, rank) }));
}
