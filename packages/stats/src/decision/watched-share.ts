import { effectiveEvents } from "../effective-events.js";
import { partOfRank } from "../grid-ranks.js";
import type { NumericComparison } from "../numeric-comparison.js";
import { nearestTo } from "../threshold-shares.js";
import type { ShareAtThreshold } from "./drift-place.js";

/** One share that a comparison is judged by: at or below a frozen threshold, or without a value. */
export interface WatchedShare extends ShareAtThreshold {
  /** Observed, moved towards the expected by what a sketch may be off: what z is computed from. */
  readonly proven: number;
  /** Events that the expected share is of. */
  readonly baselineEvents: number;
}

/** The shares of a comparison that rest on enough events to be judged; empty when it is too thin for any. */
export function watchedShares(comparison: NumericComparison, minEvents: number): readonly WatchedShare[] {
  const watched: WatchedShare[] = [];
  const { n, events, missing } = comparison;
  if (effectiveEvents(n.baseline, n.production) >= minEvents) {
    const below = comparison.belowLowest;
    for (const share of below === null ? comparison.shares : [...comparison.shares, below]) {
      watched.push({
        strictly: share === below,
        part: partOfRank(share.rank),
        rank: share.rank,
        value: share.value,
        expected: share.expected,
        observed: share.observed,
        proven: nearestTo(share.expected, share.observed, share.rankError),
        baselineEvents: n.baseline,
        events: n.production,
      });
    }
  }
  if (effectiveEvents(events.baseline, events.production) >= minEvents) {
    const observed = missing.production ?? 0;
    watched.push({
      strictly: false,
      part: "missing",
      rank: null,
      value: null,
      expected: ((missing.baseline ?? 0) * events.baseline + 0.5) / (events.baseline + 1),
      observed,
      proven: observed,
      baselineEvents: events.baseline,
      events: events.production,
    });
  }
  return watched;
}

/** Orders shares for being spoken of: furthest first; at equal |z| (thresholds that share a value) the body, then the fitting rank. */
export function furthestFirst(
  a: { readonly share: PlacedShare; readonly z: number },
  b: { readonly share: PlacedShare; readonly z: number },
): number {
  return Math.abs(b.z) - Math.abs(a.z) || misfit(a.share) - misfit(b.share);
}

type PlacedShare = Pick<WatchedShare, "part" | "rank" | "expected">;

function misfit({ part, rank, expected }: PlacedShare): number {
  return (part === "body" ? 0 : 1) + Math.abs((rank ?? expected) - expected);
}
