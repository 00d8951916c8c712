import { MoorlineError } from "@moorline/errors";
import type { CdfView } from "./cdf-view.js";

/**
 * Exact two-sided p-value of a two-sample Kolmogorov–Smirnov distance, conditional on the ties of the pooled sample.
 *
 * Definition  share of the monotone lattice paths from (0, 0) to (n, m) that, at the end of some tie block, have
 *             |i·m − j·n| ≥ D·n·m: all orders of the pooled sample are equally likely when nothing changed.
 * Shape       both views exact, n and m ≥ 1.
 * Accuracy    relative 1e-12 at any size of p: the recurrence counts the paths that are *excluded*, so only positive terms are added
 *             (1 − kept paths loses every digit below 1e-13).
 * Edges       D = 0 → 1; disjoint samples without ties → 2 / C(n + m, n).
 * Cost        O(n·m) time, O(m) memory.
 * Source      Schröer & Trenkler 1995, doi:10.1016/0167-9473(94)00040-P; the probability form of the recurrence is that of
 *             Viehmann 2021, arXiv:2102.08037.
 *
 * @throws MOORLINE_INPUT_EMPTY_SAMPLE when a side has no value
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when a view is not exact
 * @example ksPValueExact(1, cdfOf([1, 2]), cdfOf([3, 4])) // => 1/3
 */
export function ksPValueExact(distance: number, baseline: CdfView, production: CdfView): number {
  const n = baseline.n;
  const m = production.n;
  if (n === 0 || m === 0)
    throw new MoorlineError("MOORLINE_INPUT_EMPTY_SAMPLE", { statistic: "the exact p-value" });
  if (!baseline.exact || !production.exact) {
    throw new MoorlineError("MOORLINE_INPUT_STATISTIC_DOMAIN", {
      name: "the kind of sample",
      value: "a sketch that interpolates",
      domain: "exact samples",
    });
  }
  const limit = Math.ceil(distance * n * m - LATTICE_SLACK);
  const blockEnds = tieBlockEnds(baseline, production);
  // reached[j]: share of the paths to (i, j) that were outside at (i, j) or before.
  const reached = new Float64Array(m + 1);
  for (let i = 0; i <= n; i += 1) {
    for (let j = 0; j <= m; j += 1) {
      if (blockEnds[i + j] === 1 && Math.abs(i * m - j * n) >= limit) reached[j] = 1;
      else if (i + j === 0) reached[j] = 0;
      else {
        const fromLeft = j === 0 ? 0 : (j / (i + j)) * reached[j - 1]!;
        reached[j] = (i === 0 ? 0 : (i / (i + j)) * reached[j]!) + fromLeft;
      }
    }
  }
  return reached[m]!;
}

/** D·n·m is a whole number; this keeps its rounding error from moving it to the next one. */
const LATTICE_SLACK = 1e-7;

/** 1 at every count of pooled values, lowest first, after which the next value is greater. */
function tieBlockEnds(baseline: CdfView, production: CdfView): Uint8Array {
  const ends = new Uint8Array(baseline.n + production.n + 1);
  let i = 0;
  let j = 0;
  while (i < baseline.values.length || j < production.values.length) {
    const a = baseline.values[i] ?? Number.POSITIVE_INFINITY;
    const b = production.values[j] ?? Number.POSITIVE_INFINITY;
    if (a <= b) i += 1;
    if (b <= a) j += 1;
    const pooled = (i === 0 ? 0 : baseline.upTo[i - 1]!) + (j === 0 ? 0 : production.upTo[j - 1]!);
    ends[pooled] = 1;
  }
  return ends;
}
