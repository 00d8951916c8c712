import { MoorlineError } from "@moorline/errors";
import type { CdfView } from "./cdf-view.js";
import { type CountRange, countRange } from "./count-range.js";
import type { DesignEffect } from "./design-effect.js";
import type { BandConfidence } from "./deviance-band.js";
import { GRID_RANKS } from "./grid-ranks.js";
import { quantileOf, valueAtEvents } from "./quantile-of.js";

/** Baseline and production quantile at one rank, with the band around the production one. */
export interface QuantilePair {
  readonly rank: number;
  /** Null where the baseline has no value as far out as this rank. */
  readonly baseline: number | null;
  /** Null where production has no value as far out as this rank. */
  readonly production: number | null;
  /** Ends of the simultaneous band; null where the band runs out of the data. A baseline value outside is a difference. */
  readonly low: number | null;
  readonly high: number | null;
  /** Set, and true, when a side has less than one event expected beyond this rank: its quantile is not invented. */
  readonly beyondData?: true;
}

export interface QuantilePairsOptions {
  readonly ranks?: readonly number[];
  /** Of the whole band, over all ranks at once. Default .999. */
  readonly confidence?: BandConfidence;
  /** Default 1: independent events. */
  readonly designEffect?: DesignEffect;
}

/**
 * Quantile pairs with a simultaneous confidence band.
 *
 * Definition  pair at rank p: (Q_F(p), Q_G(p)); a value y is consistent with rank p when L ≤ #{Y ≤ y} ≤ U, that is, the band is
 *             [Y(L), Y(U+1)], with L and U from countRange; both sides' rank errors widen it.
 * Shape       one pair a rank, in the order of the ranks.
 * Accuracy    coverage measured: .94–.99 for the nominal .95 (docs/quantile-pairs.md).
 * Edges       a rank with n·min(p, 1 − p) < 1 on a side has null there and is marked `beyondData`; at an atom the band is closed on
 *             both sides, hence conservative there.
 * Cost        O(ranks · log knots).
 * Source      Doksum & Sievers 1976, doi:10.1093/biomet/63.3.421 (band for the shift function).
 *
 * @throws MOORLINE_INPUT_EMPTY_SAMPLE when a side has no value
 */
export function quantilePairs(
  baseline: CdfView,
  production: CdfView,
  options: QuantilePairsOptions = {},
): readonly QuantilePair[] {
  if (baseline.n === 0 || production.n === 0) {
    throw new MoorlineError("MOORLINE_INPUT_EMPTY_SAMPLE", { statistic: "quantile pairs" });
  }
  const band = { confidence: options.confidence ?? 0.999, designEffect: options.designEffect ?? 1 };
  return (options.ranks ?? GRID_RANKS).map((rank) => {
    const range = countRange(baseline, production, rank, band);
    return pairAt(rank, baseline, production, range);
  });
}

function pairAt(rank: number, baseline: CdfView, production: CdfView, range: CountRange): QuantilePair {
  const error = (baseline.rankErrorAt(rank) + production.rankErrorAt(rank)) * production.n;
  const lowest = Math.ceil(range.lowest - error);
  const highest = Math.floor(range.highest + error);
  const pair = {
    rank,
    baseline: supports(baseline, rank) ? quantileOf(baseline, rank) : null,
    production: supports(production, rank) ? quantileOf(production, rank) : null,
    low: lowest >= 1 ? valueAtEvents(production, lowest) : null,
    high: highest + 1 <= production.n ? valueAtEvents(production, highest + 1) : null,
  };
  return pair.baseline === null || pair.production === null ? { ...pair, beyondData: true } : pair;
}

/** Is at least one event expected beyond the rank? The slack lets 1,000 values support rank .999 in spite of rounding. */
function supports(view: CdfView, rank: number): boolean {
  return view.n * Math.min(rank, 1 - rank) >= 1 - 1e-9;
}
