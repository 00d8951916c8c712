import type { QuantilePair } from "../quantile-pairs.js";

/** How far production has moved at one rank, in the feature's unit and as a factor. */
export interface ShiftPoint {
  readonly rank: number;
  /** Production's quantile less the baseline's; null where a side does not reach the rank. */
  readonly difference: number | null;
  /** Production's quantile over the baseline's; null where the signs differ or one is 0: no factor leads from one to the other. */
  readonly ratio: number | null;
  /** Ends of the simultaneous band around the difference; null where it is open. 0 outside the band is a difference at this rank. */
  readonly low: number | null;
  readonly high: number | null;
  /** As in the pair. */
  readonly beyondData?: true;
}

/**
 * The shift function, by rank: what has to be added to, or multiplied with, the baseline's quantile to get production's.
 *
 * Definition  Δ(p) = Q_G(p) − Q_F(p), that is Δ(x) = G⁻¹(F(x)) − x at x = Q_F(p); ratio Q_G(p)/Q_F(p). The band is that of the pairs, less
 *             the baseline's quantile, so it holds over all ranks at once with the same confidence.
 * Shape       one point a pair, in their order.
 * Edges       a pair marked `beyondData` has null difference, ratio and band; a value that no double holds is the largest one that is.
 * Cost        O(pairs).
 * Source      Doksum 1974, doi:10.1214/aos/1176342662; Doksum & Sievers 1976, doi:10.1093/biomet/63.3.421.
 */
export function shiftFunction(pairs: readonly QuantilePair[]): readonly ShiftPoint[] {
  return pairs.map(({ rank, baseline, production, low, high, beyondData }) => {
    const point = {
      rank,
      difference: less(production, baseline),
      ratio: factor(production, baseline),
      low: production === null ? null : less(low, baseline),
      high: production === null ? null : less(high, baseline),
    };
    return beyondData ? { ...point, beyondData } : point;
  });
}

function less(value: number | null, baseline: number | null): number | null {
  return value === null || baseline === null ? null : finite(value - baseline);
}

function factor(production: number | null, baseline: number | null): number | null {
  if (production === null || baseline === null) return null;
  return Math.sign(production) * Math.sign(baseline) === 1 ? finite(production / baseline) : null;
}

function finite(value: number): number {
  return Math.min(Number.MAX_VALUE, Math.max(-Number.MAX_VALUE, value));
}
