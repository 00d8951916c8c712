import { FROZEN_RANKS } from "../grid-ranks.js";
import type { NumericComparison } from "../numeric-comparison.js";
import type { NumericSide } from "../numeric-side.js";
import type { WatchedCounts } from "../sway/watched-counts.js";
import { belowLowestShare, nearestTo, type ThresholdShare, thresholdShares } from "../threshold-shares.js";

/**
 * The counts of a compared window that the decision works on.
 *
 * Edges  a count that had to be read from a digest is moved towards the expected one by as much as it may be off; a window without a finite value has
 *        zeros.
 */
export function windowCounts(comparison: NumericComparison): WatchedCounts {
  const { n, events, missing, shares } = comparison;
  return {
    events: events.production,
    missing: Math.round((missing.production ?? 0) * events.production),
    finite: n.production,
    atOrBelow: countsAtThresholds(shares, n.production),
    belowLowest: provenEvents(comparison.belowLowest, n.production),
  };
}

/** The same counts without the rest of a comparison: what a rehearsal of thousands of windows works on. */
export function countWindow(baseline: NumericSide, production: NumericSide): WatchedCounts {
  const m = production.cdf.n;
  const compared = baseline.cdf.n > 0 && m > 0;
  return {
    events: production.events,
    missing: production.missing,
    finite: m,
    atOrBelow: countsAtThresholds(compared ? thresholdShares(baseline, production) : [], m),
    belowLowest: compared ? provenEvents(belowLowestShare(baseline, production), m) : null,
  };
}

function countsAtThresholds(shares: readonly ThresholdShare[], finite: number): readonly number[] {
  if (shares.length === 0) return new Array<number>(FROZEN_RANKS.length).fill(0);
  return shares.map((share) => provenEvents(share, finite)!);
}

/** The count, or, where it was read from a digest, the one nearest to what was expected that the digest's error allows. */
function provenEvents(share: ThresholdShare | null, finite: number): number | null {
  if (share === null) return null;
  if (share.rankError === 0) return share.events;
  return nearestTo(share.expected, share.observed, share.rankError) * finite;
}
