import { decileBins } from "./decile-bins.js";
import { type DesignEffect, designEffectAt } from "./design-effect.js";
import type { BandConfidence } from "./deviance-band.js";
import { FROZEN_RANKS, partOfRank } from "./grid-ranks.js";
import { ksOfSweep } from "./ks-distance.js";
import { ksPValue } from "./ks-p-value.js";
import type { ComparedNumeric, NumericComparison, ThinNumeric } from "./numeric-comparison.js";
import type { NumericSide } from "./numeric-side.js";
import { jensenShannonDistance, populationStabilityIndex } from "./population-stability.js";
import { quantilePairs } from "./quantile-pairs.js";
import { sweepCdfs } from "./sweep-cdfs.js";
import { reaches, TAIL_SUPPORT, tailDivergence } from "./tail-divergence/tail-divergence.js";
import { type TailExceedance, tailExceedance } from "./tail-exceedance.js";
import { belowLowestShare, countAt, thresholdShares, thresholdsOf } from "./threshold-shares.js";
import { wassersteinScale } from "./wasserstein-scale.js";

export interface CompareOptions {
  /** Of the band around the quantile pairs. Default .999. */
  readonly confidence?: BandConfidence;
  /** Of dependence between events, for band, p-value and tail intervals. Default 1: independent. */
  readonly designEffect?: DesignEffect;
  /** False leaves the quantile pairs, and the exceedance at three ranks of each tail, out: whoever only decides does not need them. Default true. */
  readonly pairs?: boolean;
}

/**
 * Everything that is told of one numeric feature: distances with their place, tails, quantile pairs with their band, shares at the
 * frozen thresholds.
 *
 * Shape   any two sides; a side without a finite value gives a `thin` result with null in place of every statistic.
 * Edges   never NaN, never infinite: `JSON.parse(JSON.stringify(result))` equals the result.
 * Cost    O(knots of both) + O(ranks · log knots).
 *
 * @example compareNumeric(numericSideOf([1, 2]), numericSideOf([])).thin // => true
 */
export function compareNumeric(
  baseline: NumericSide,
  production: NumericSide,
  options: CompareOptions = {},
): NumericComparison {
  if (baseline.cdf.n === 0 || production.cdf.n === 0) return thinComparison(baseline, production);
  const sweep = sweepCdfs(baseline.cdf, production.cdf);
  const scale = wassersteinScale(baseline.cdf);
  const bins = decileBins(baseline.cdf, production.cdf);
  const shares = thresholdShares(baseline, production);
  const inFull = options.pairs ?? true;
  return {
    ...countsOf(baseline, production),
    thin: false,
    reason: null,
    ks: { ...ksOfSweep(sweep), pValue: pValueOf(sweep.distance, baseline, production, options.designEffect) },
    wasserstein: {
      distance: sweep.area,
      scaled: scale === null ? null : Math.min(sweep.area / scale, Number.MAX_VALUE),
    },
    tails: {
      lower: headlineTail(baseline, production, "lower", options.designEffect),
      upper: headlineTail(baseline, production, "upper", options.designEffect),
    },
    tailRanks: {
      lower: inFull ? tailDivergence(baseline, production, "lower", options) : [],
      upper: inFull ? tailDivergence(baseline, production, "upper", options) : [],
    },
    psi: populationStabilityIndex(bins),
    jensenShannon: jensenShannonDistance(bins),
    pairs: inFull ? quantilePairs(baseline.cdf, production.cdf, options) : [],
    shares,
    belowLowest: belowLowestShare(baseline, production),
    exactCounts: shares.every((s) => countAt(production.cdf, s.value, production.thresholdCounts).counted),
  };
}

/** Sketch error can feign a distance: what the two sketches may be off by, at worst mid-distribution, is taken off before the test. */
function pValueOf(
  distance: number,
  baseline: NumericSide,
  production: NumericSide,
  effect: DesignEffect | undefined,
): number {
  const error = baseline.cdf.rankErrorAt(0.5) + production.cdf.rankErrorAt(0.5);
  return ksPValue({
    distance: Math.min(1, Math.max(0, distance - error)),
    n: baseline.cdf.n,
    m: production.cdf.n,
    designEffect: largestInBody(effect),
    samples: [baseline.cdf, production.cdf],
  });
}

/** The KS distance is decided in the body, at a rank not known beforehand: the largest effect there is the safe one. */
function largestInBody(effect: DesignEffect | undefined): number {
  if (typeof effect !== "function") return designEffectAt(effect, 0.5);
  return Math.max(...BODY_RANKS.map((rank) => designEffectAt(effect, rank)));
}

const BODY_RANKS = FROZEN_RANKS.filter((rank) => partOfRank(rank) === "body");

const HEADLINE_RANKS = { lower: [0.01, 0.05, 0.1, 0.25], upper: [0.99, 0.95, 0.9, 0.75] } as const;

function headlineTail(
  baseline: NumericSide,
  production: NumericSide,
  tail: "lower" | "upper",
  designEffect: DesignEffect = 1,
): TailExceedance | null {
  const rank = HEADLINE_RANKS[tail].find(
    (r) => reaches(baseline.cdf.n, r, TAIL_SUPPORT) && reaches(production.cdf.n, r, 1),
  );
  if (rank === undefined) return null;
  const threshold = thresholdsOf(baseline).find((t) => t.rank === rank)!.value;
  return tailExceedance({
    baseline: baseline.cdf,
    production: production.cdf,
    rank,
    tail,
    threshold,
    thresholdCounts: { baseline: baseline.thresholdCounts, production: production.thresholdCounts },
    designEffect,
  });
}

function thinComparison(baseline: NumericSide, production: NumericSide): ThinNumeric {
  const side = baseline.cdf.n === 0 ? "the baseline" : "production";
  return {
    ...countsOf(baseline, production),
    thin: true,
    reason: `${side} has no finite value`,
    ks: null,
    wasserstein: null,
    tails: null,
    tailRanks: null,
    psi: null,
    jensenShannon: null,
    pairs: [],
    shares: [],
    belowLowest: null,
    exactCounts: null,
  };
}

function countsOf(
  baseline: NumericSide,
  production: NumericSide,
): Pick<ComparedNumeric, "kind" | "n" | "events" | "missing" | "nonFinite"> {
  const fraction = (part: number, whole: number) => (whole === 0 ? null : part / whole);
  return {
    kind: "numeric",
    n: { baseline: baseline.cdf.n, production: production.cdf.n },
    events: { baseline: baseline.events, production: production.events },
    missing: {
      baseline: fraction(baseline.missing, baseline.events),
      production: fraction(production.missing, production.events),
    },
    nonFinite: {
      baseline: fraction(baseline.nonFinite, baseline.events),
      production: fraction(production.nonFinite, production.events),
    },
  };
}
