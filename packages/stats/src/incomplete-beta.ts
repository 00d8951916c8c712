/// <reference path="./jstat.d.ts" />
import jstat from "jstat";
import { stirlingRest } from "./log-gamma.js";

/**
 * Regularised incomplete beta function I_x(a, b), the CDF of the beta distribution.
 *
 * Definition  prefactor x^a (1 − x)^b / (a B(a, b)) times a continued fraction, on the side of the mean where it converges fast.
 * Shape       x in [0, 1]; a, b > 0, not necessarily whole.
 * Accuracy    relative 1e-12 to a, b of 10⁷; jstat's own ends at 3e-7 and is cut at 100 terms, too few beyond a few thousand events
 *             (docs/decisions/0001-incomplete-beta.md).
 * Cost        O(√max(a, b)) terms.
 * Source      DLMF 8.17.22, https://dlmf.nist.gov/8.17; evaluated by the modified Lentz method; prefactor by the saddle-point form of
 *             Loader 2000 ("Fast and accurate computation of binomial probabilities").
 */
export function incompleteBeta(x: number, a: number, b: number): number {
  return betaTails(x, a, b).lower;
}

/**
 * Quantile of the beta distribution: the x with I_x(a, b) = probability.
 *
 * Accuracy    relative 1e-11; starts from jstat's quantile and is refined by Newton steps kept within a bracket.
 * Edges       probability 0 → 0, 1 → 1.
 */
export function betaQuantile(probability: number, a: number, b: number): number {
  if (probability <= 0) return 0;
  if (probability >= 1) return 1;
  const start = jstat.beta.inv(probability, a, b);
  let low = 0;
  let high = 1;
  let x = start > 0 && start < 1 ? start : a / (a + b);
  for (let step = 0; step < 40; step += 1) {
    const { lower, upper } = betaTails(x, a, b);
    // Held against the smaller tail: 1 − probability is exact from ½ up, and so keeps its digits.
    const miss = probability < 0.5 ? lower - probability : 1 - probability - upper;
    if (miss > 0) high = x;
    else low = x;
    const newton = x - (miss * x * (1 - x)) / scaledDensity(x, 1 - x, a, b);
    // Near 1 a step matters by what it changes of 1 − x, but none is smaller than one rounding of x.
    if (Math.abs(newton - x) <= Math.max(1e-13 * Math.min(x, 1 - x), Number.EPSILON * x)) return newton;
    x = newton > low && newton < high ? newton : (low + high) / 2;
  }
  return x;
}

/** Both tails; the one on the far side of x from the mean is computed, the other is what it leaves. */
function betaTails(x: number, a: number, b: number): { readonly lower: number; readonly upper: number } {
  if (x <= 0) return { lower: 0, upper: 1 };
  if (x >= 1) return { lower: 1, upper: 0 };
  if (x <= (a + 1) / (a + b + 2)) {
    const lower = lowerPart(x, 1 - x, a, b);
    return { lower, upper: 1 - lower };
  }
  const upper = lowerPart(1 - x, x, b, a);
  return { lower: 1 - upper, upper };
}

function lowerPart(x: number, y: number, a: number, b: number): number {
  return (scaledDensity(x, y, a, b) / a) * continuedFraction(x, a, b);
}

/** x^a y^b / B(a, b) with y = 1 − x, without the cancellation of three log-gammas of large arguments. */
function scaledDensity(x: number, y: number, a: number, b: number): number {
  const total = a + b;
  const deviance = a * logRatio(a, total * x) + b * logRatio(b, total * y);
  const correction = stirlingRest(total) - stirlingRest(a) - stirlingRest(b);
  return Math.exp(correction - deviance) * Math.sqrt((a * b) / (2 * Math.PI * total));
}

/** ln(k / mean), by a series where the two are close. */
function logRatio(k: number, mean: number): number {
  const difference = (k - mean) / mean;
  return Math.abs(difference) < 0.5 ? Math.log1p(difference) : Math.log(k / mean);
}

const SMALLEST = 1e-300;

function continuedFraction(x: number, a: number, b: number): number {
  let c = 1;
  let d = 1 / nonZero(1 - ((a + b) * x) / (a + 1));
  let fraction = d;
  const most = 200 + 20 * Math.sqrt(Math.max(a, b));
  for (let m = 1; m < most; m += 1) {
    const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
    d = 1 / nonZero(1 + even * d);
    c = nonZero(1 + even / c);
    fraction *= c * d;
    const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
    d = 1 / nonZero(1 + odd * d);
    c = nonZero(1 + odd / c);
    fraction *= c * d;
    if (Math.abs(c * d - 1) < 1e-15) break;
  }
  return fraction;
}

function nonZero(value: number): number {
  return Math.abs(value) < SMALLEST ? SMALLEST : value;
}
