import type { CdfView } from "./cdf-view.js";
import { type DesignEffect, designEffectAt } from "./design-effect.js";
import { BAND_CRITICAL, type BandConfidence, shareRange } from "./deviance-band.js";
import { effectiveEvents } from "./effective-events.js";
import { logFactorial } from "./log-gamma.js";

/** How many production values may lie at or below a baseline quantile when nothing changed. */
export interface CountRange {
  readonly lowest: number;
  readonly highest: number;
}

/** Below this many values of either side beyond a rank the law of the count is summed exactly. */
export const EXACT_BELOW = 50;

/** One-sided level of each rank: the normal tail beyond the critical value. */
const LEVELS: Record<BandConfidence, number> = { 0.95: 1.2723e-3, 0.99: 2.2156e-4, 0.999: 2.0658e-5 };

/**
 * The counts #{Y ≤ x}, x the baseline's quantile at a rank, that are consistent with no change; every rank has the same level.
 *
 * Definition  fewer than 50 values of a side beyond the rank and D = 1: the exact law, P(#{Y ≤ X(j)} = k) beta-binomial (m; j, n + 1 − j),
 *             cut on both sides at the level Φ(−critical), with the order statistics on either side of the quantile; else the
 *             shares with |z| ≤ critical, z the signed-root deviance.
 * Shape       n, m ≥ 1; rank in (0, 1).
 * Units       counts of production values, 0 to m.
 * Accuracy    exact law: conservative by what a count is coarse; the two forms differ by less than one count in 50 at their seam.
 * Cost        about ten Newton steps, or a sum of some hundred terms, or log₂(m) sums of at most 51 terms a side.
 * Source      equal local levels: Berk & Jones 1979, doi:10.1007/BF00533250; Aldor-Noiman et al. 2013, "The power to see".
 */
export function countRange(
  baseline: CdfView,
  production: CdfView,
  rank: number,
  options: { readonly confidence: BandConfidence; readonly designEffect: DesignEffect },
): CountRange {
  const [n, m] = [Math.round(baseline.n), Math.round(production.n)];
  const beyond = Math.min(n, m) * Math.min(rank, 1 - rank);
  const designEffect = designEffectAt(options.designEffect, rank);
  if (beyond < EXACT_BELOW && designEffect === 1) {
    const level = LEVELS[options.confidence];
    if (rank <= 0.5) return exactRange(n, m, rank, level);
    const mirrored = exactRange(n, m, 1 - rank, level);
    return { lowest: m - mirrored.highest, highest: m - mirrored.lowest };
  }
  const effective = effectiveEvents(baseline.n, production.n, designEffect);
  const share = shareRange(rank, effective, BAND_CRITICAL[options.confidence]);
  return {
    lowest: Math.max(0, Math.ceil(production.n * share.low - COUNT_SLACK)),
    highest: Math.min(m, Math.floor(production.n * share.high + COUNT_SLACK)),
  };
}

/** Keeps a count that is whole but for rounding from being moved to the next one. */
const COUNT_SLACK = 1e-9;

/** For ranks up to ½. The quantile lies between X(j) and X(j + 1), with j = ⌊(n − 1)·rank⌋ + 1. */
function exactRange(n: number, m: number, rank: number, level: number): CountRange {
  const j = Math.floor((n - 1) * rank + COUNT_SLACK) + 1;
  const next = Math.min(j + 1, n);
  if (m * rank < EXACT_BELOW) {
    return {
      lowest: firstCount(n, m, j, (atMost) => atMost > level),
      highest: firstCount(n, m, next, (atMost) => 1 - atMost <= level),
    };
  }
  // Seen from the baseline's side, whose counts are the small ones. Both probabilities are monotone, so the ends are found by halving.
  const lowest = lastWhere(m, (count) => 1 - baselineAtMost(j - 1, count, n, m) <= level);
  const highest = m - lastWhere(m, (missing) => baselineAtMost(next - 1, m - missing + 1, n, m) <= level);
  return { lowest, highest };
}

/** The first k for which P(#{Y ≤ X(j)} ≤ k) meets a condition; m when none before does. */
function firstCount(n: number, m: number, j: number, meets: (atMost: number) => boolean): number {
  let term = Math.exp(logFactorial(n + m - j) - logFactorial(n - j) - logFactorial(n + m) + logFactorial(n));
  let atMost = term;
  for (let k = 0; k < m; k += 1) {
    if (meets(atMost)) return k;
    term *= ((k + j) / (k + 1)) * ((m - k) / (m - k + n - j));
    atMost += term;
  }
  return m;
}

/** The greatest k in 0 … m for which `holds` is true, given that it is for 0 and that it stays false once false. */
function lastWhere(m: number, holds: (k: number) => boolean): number {
  let low = 0;
  let high = m + 1;
  while (high - low > 1) {
    const middle = Math.floor((low + high) / 2);
    if (holds(middle)) low = middle;
    else high = middle;
  }
  return low;
}

/** P(at most `most` of n baseline values lie below the `count`-th smallest of m production values), when nothing changed. */
function baselineAtMost(most: number, count: number, n: number, m: number): number {
  if (count > m) return 0;
  let term = Math.exp(
    logFactorial(n + m - count) - logFactorial(m - count) - logFactorial(n + m) + logFactorial(m),
  );
  let sum = term;
  for (let i = 0; i < most; i += 1) {
    term *= ((i + count) / (i + 1)) * ((n - i) / (n - i + m - count));
    sum += term;
  }
  return Math.min(1, sum);
}
