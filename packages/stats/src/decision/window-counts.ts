import { FROZEN_RANKS } from "../grid-ranks.js";
import type { NumericComparison } from "../numeric-comparison.js";
import type { WatchedCounts } from "../sway/watched-counts.js";
import { nearestTo } from "../threshold-shares.js";

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
    atOrBelow:
      shares.length === 0
        ? new Array<number>(FROZEN_RANKS.length).fill(0)
        : shares.map((share) =>
            share.rankError === 0
              ? share.events
              : nearestTo(share.expected, share.observed, share.rankError) * n.production,
          ),
  };
}
