import { effectiveEvents } from "./effective-events.js";
import { partOfRank } from "./grid-ranks.js";
import type { NumericComparison } from "./numeric-comparison.js";
import { nearestTo } from "./threshold-shares.js";

/** One share that the decision watches: at or below a frozen threshold, or without a value. */
export interface WatchedShare {
  /** Names the share from window to window: `p` and the rank, or `missing`. */
  readonly key: string;
  readonly part: "lower tail" | "body" | "upper tail" | "missing";
  /** Of the threshold; null for `missing`. */
  readonly rank: number | null;
  /** The threshold; null for `missing`. */
  readonly value: number | null;
  readonly expected: number;
  readonly observed: number;
  /** Observed, moved towards the expected by what a sketch may be off: what z is computed from. */
  readonly proven: number;
  /** Events that the shares are of. */
  readonly baselineEvents: number;
  readonly productionEvents: number;
}

/** The shares of a comparison that rest on enough events to be judged; empty when the window is too thin for any. */
export function watchedShares(comparison: NumericComparison, minEvents: number): readonly WatchedShare[] {
  const watched: WatchedShare[] = [];
  const { n, events, missing } = comparison;
  if (effectiveEvents(n.baseline, n.production) >= minEvents) {
    for (const share of comparison.shares) {
      watched.push({
        key: `p${share.rank}`,
        part: partOfRank(share.rank),
        rank: share.rank,
        value: share.value,
        expected: share.expected,
        observed: share.observed,
        proven: nearestTo(share.expected, share.observed, share.rankError),
        baselineEvents: n.baseline,
        productionEvents: n.production,
      });
    }
  }
  if (effectiveEvents(events.baseline, events.production) >= minEvents) {
    const observed = missing.production ?? 0;
    watched.push({
      key: "missing",
      part: "missing",
      rank: null,
      value: null,
      expected: ((missing.baseline ?? 0) * events.baseline + 0.5) / (events.baseline + 1),
      observed,
      proven: observed,
      baselineEvents: events.baseline,
      productionEvents: events.production,
    });
  }
  return watched;
}

/** Orders shares for being spoken of: furthest first; at equal |z| (thresholds that share a value) the body, then the fitting rank. */
export function furthestFirst(
  a: { readonly share: WatchedShare; readonly z: number },
  b: { readonly share: WatchedShare; readonly z: number },
): number {
  const misfit = ({ share }: { readonly share: WatchedShare }) =>
    (share.part === "body" ? 0 : 1) + Math.abs((share.rank ?? share.expected) - share.expected);
  return Math.abs(b.z) - Math.abs(a.z) || misfit(a) - misfit(b);
}
