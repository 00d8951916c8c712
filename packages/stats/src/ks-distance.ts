import { MoorlineError } from "@moorline/errors";
import type { CdfView } from "./cdf-view.js";
import { type CdfSweep, sweepCdfs } from "./sweep-cdfs.js";

export interface KsDistance {
  /** In [0, 1]. */
  readonly distance: number;
  /** The first value at which the distance is reached. */
  readonly at: number;
  /** `above` where production's CDF lies above the baseline's at `at` (production is smaller there), else `below`. */
  readonly direction: "above" | "below";
}

/**
 * Two-sample Kolmogorov–Smirnov distance.
 *
 * Definition  D = sup over x of |F(x) − G(x)|, F the baseline's CDF, G production's; both one-sided limits of every jump are compared.
 * Shape       both views hold at least one value.
 * Units       D: fraction of probability in [0, 1]; `at`: the feature's unit.
 * Accuracy    exact on exact views and on piecewise-linear ones; with rank errors ea, eb the true D is in D ± (ea + eb).
 * Edges       identical → 0 (with `at` the smallest value, `below`); disjoint → 1; ties share one jump; the distance is symmetric and
 *             unchanged by monotone transforms.
 * Cost        O(knots of both) time, no allocation but the result.
 * Source      Smirnov 1948, doi:10.1214/aoms/1177730256.
 *
 * @throws MOORLINE_INPUT_EMPTY_SAMPLE when a side has no value
 * @example ksDistance(cdfOf([1, 2]), cdfOf([3, 4])) // => { distance: 1, at: 2, direction: "below" }
 */
export function ksDistance(baseline: CdfView, production: CdfView): KsDistance {
  if (baseline.n === 0 || production.n === 0) {
    throw new MoorlineError("MOORLINE_INPUT_EMPTY_SAMPLE", { statistic: "the Kolmogorov–Smirnov distance" });
  }
  return ksOfSweep(sweepCdfs(baseline, production));
}

/** The Kolmogorov–Smirnov part of a sweep that also served another statistic. */
export function ksOfSweep(sweep: CdfSweep): KsDistance {
  return { distance: sweep.distance, at: sweep.at, direction: sweep.sign > 0 ? "above" : "below" };
}
