import { MoorlineError } from "@moorline/errors";
import type { CdfView } from "../cdf-view.js";
import { walkUnion } from "../walk-union.js";

/** Where a run of equal values is compared: at the middle of its jump, or right of it. */
export type TieVersion = "midrank" | "right";

/**
 * k-sample Anderson–Darling statistic.
 *
 * Definition  midrank: (N − 1)/N · Σ_i 1/n_i · Σ_j l_j/N · (N·M_ij − n_i·B_j)²/(B_j(N − B_j) − N·l_j/4), over the distinct pooled values j
 *             with l_j events, B_j and M_ij the events of all and of sample i before j plus half of those at j.
 *             right: Σ_i 1/n_i · Σ_j l_j/N · (N·M_ij − n_i·B_j)²/(B_j(N − B_j)), all up to and with j, the last j left out.
 *             Where views are linear between knots the sum becomes the integral over dB, in closed form.
 * Shape       at least two views, each with a value.
 * Units       unitless, ≥ 0; its mean is k − 1 when all samples come from one law.
 * Accuracy    exact on exact and on piecewise-linear views, up to rounding.
 * Edges       all values equal → 0; unchanged by monotone transforms and by the order of the samples; for two samples without ties
 *             `right` is Pettitt's 1/(nm) Σ (M_i·N − m·i)²/(i(N − i)).
 * Cost        O(knots of all · k) time.
 * Source      Scholz & Stephens 1987, doi:10.1080/01621459.1987.10478517, equations 6 and 7; Pettitt 1976, doi:10.1093/biomet/63.1.161.
 *
 * @throws MOORLINE_INPUT_EMPTY_SAMPLE when a side has no value
 * @example andersonDarlingStatistic([cdfOf([7, 7]), cdfOf([7])]) // => 0
 */
export function andersonDarlingStatistic(views: readonly CdfView[], ties: TieVersion = "midrank"): number {
  if (views.length < 2 || views.some(({ n }) => n === 0)) {
    throw new MoorlineError("MOORLINE_INPUT_EMPTY_SAMPLE", { statistic: "the Anderson–Darling statistic" });
  }
  const sizes = views.map(({ n }) => n);
  const total = sizes.reduce((sum, n) => sum + n, 0);
  const before = new Float64Array(views.length);
  let sum = 0;
  walkUnion(views, ({ below, upTo }) => {
    let start = 0;
    let from = 0;
    let to = 0;
    for (let i = 0; i < sizes.length; i += 1) {
      start += before[i]!;
      from += below[i]!;
      to += upTo[i]!;
    }
    for (let i = 0; i < sizes.length; i += 1) {
      const n = sizes[i]!;
      const slope = slopePart(total, n, start, from, before[i]!, below[i]!);
      sum += (slope + jumpPart(total, n, from, to, below[i]!, upTo[i]!, ties)) / n;
      before[i] = upTo[i]!;
    }
  });
  return ties === "midrank" ? ((total - 1) / total) * sum : sum;
}

/** One run of equal values. All in events: B of all samples, M of one with n values. */
function jumpPart(
  total: number,
  n: number,
  b0: number,
  b1: number,
  m0: number,
  m1: number,
  ties: TieVersion,
): number {
  const length = b1 - b0;
  if (length === 0) return 0;
  const b = ties === "midrank" ? b0 + length / 2 : b1;
  const m = ties === "midrank" ? m0 + (m1 - m0) / 2 : m1;
  const variance = b * (total - b) - (ties === "midrank" ? (total * length) / 4 : 0);
  // Everything is one value, or the last of the `right` version: nothing is left to compare.
  if (!(variance > 0)) return 0;
  const difference = total * m - n * b;
  return ((length / total) * difference * difference) / variance;
}

/**
 * ∫ (N·M − n·B)²/(B(N − B)) dB/N over a piece where both are linear: with N·M − n·B = p + qB the integrand is
 * −q² + p²/N/B + (p + qN)²/N/(N − B).
 */
function slopePart(total: number, n: number, b0: number, b1: number, m0: number, m1: number): number {
  const width = b1 - b0;
  if (!(width > 0)) return 0;
  const q = (total * (m1 - m0)) / width - n;
  const p = total * m0 - n * b0 - q * b0;
  const end = p + q * total;
  const left = b0 > 0 ? (p * p * Math.log1p(width / b0)) / total : 0;
  const right = b1 < total ? (end * end * Math.log1p(width / (total - b1))) / total : 0;
  return Math.max(0, left + right - q * q * width) / total;
}
