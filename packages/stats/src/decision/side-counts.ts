import type { NumericSide } from "../numeric-side.js";
import type { WatchedCounts } from "../sway/watched-counts.js";
import { belowLowestEvents, countAt, thresholdsOf } from "../threshold-shares.js";

/** Counts of a whole baseline at its own thresholds. */
export interface SideCounts extends WatchedCounts {
  /** By frozen rank; empty without a finite value. */
  readonly thresholds: readonly number[];
}

/** What the decision holds windows against: exact where the baseline was counted, else read from its digest. */
export function sideCounts(side: NumericSide): SideCounts {
  const thresholds = thresholdsOf(side).map(({ value }) => value);
  return {
    events: side.events,
    missing: side.missing,
    finite: side.cdf.n,
    atOrBelow: thresholds.map((value) => countAt(side.cdf, value, side.thresholdCounts).events),
    belowLowest: belowLowestEvents(side),
    thresholds,
  };
}
