import { effectiveEvents } from "../effective-events.js";
import type { BothSides } from "../numeric-comparison.js";
import { signedRootDeviance } from "../signed-root-deviance.js";
import { requireCounts, wilson } from "./wilson.js";

/** So many of so many. */
export interface RateCounts {
  readonly events: number;
  readonly trials: number;
}

export interface RateChange extends BothSides<number> {
  /** Production's share minus the baseline's. */
  readonly difference: number;
  /** 95 % interval of the difference unless another confidence was asked for. */
  readonly interval: readonly [low: number, high: number];
  /** Standard deviations; positive where production has more. */
  readonly z: number;
}

export interface RateChangeOptions {
  /** By how much dependence inflates variances, ≥ 1. Default 1. */
  readonly designEffect?: number;
  readonly confidence?: number;
}

/**
 * How a share changed from baseline to production: of missing values, of one category, beyond one threshold.
 *
 * Definition  difference d = g − e; interval d − √((g − l_g)² + (u_e − e)²) to d + √((u_g − g)² + (e − l_e)²) with the Wilson limits l, u of
 *             both shares at n/D and m/D trials (Newcombe's method 10); z the signed-root deviance of g against (x + ½)/(n + 1), x the
 *             baseline's count, at the effective events M.
 * Shape       trials > 0 on both sides.
 * Units       shares in [0, 1], difference in [−1, 1], z in standard deviations.
 * Accuracy    coverage of the interval .952–.959 for shares of .001 to .2 and 200 to 1,000 trials; one-sided size of z at a nominal .001:
 *             at most .0013, where the pooled z-test has .0086 (docs/rate-change.md).
 * Edges       none on both sides → difference 0, interval around it, z 0; all of one and none of the other → −1 or 1, finite z.
 * Source      Newcombe 1998, doi:10.1002/(SICI)1097-0258(19980430)17:8<873::AID-SIM779>3.0.CO;2-I.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when events are not in [0, trials] or trials are not positive
 * @example rateChange({ events: 5, trials: 10 }, { events: 5, trials: 10 }).difference // => 0
 */
export function rateChange(
  baseline: RateCounts,
  production: RateCounts,
  { designEffect = 1, confidence = 0.95 }: RateChangeOptions = {},
): RateChange {
  for (const { events, trials } of [baseline, production]) requireCounts(events, trials);
  const e = baseline.events / baseline.trials;
  const g = production.events / production.trials;
  const limits = ({ events, trials }: RateCounts) =>
    wilson(events / designEffect, trials / designEffect, confidence);
  const [lowE, highE] = limits(baseline);
  const [lowG, highG] = limits(production);
  return {
    baseline: e,
    production: g,
    difference: g - e,
    interval: [g - e - Math.hypot(g - lowG, highE - e), g - e + Math.hypot(highG - g, e - lowE)],
    z: rateZ(baseline, production, effectiveEvents(baseline.trials, production.trials, designEffect)),
  };
}

/** The signed-root deviance of production's share against the baseline's, at so many effective events. */
export function rateZ(baseline: RateCounts, production: RateCounts, effective: number): number {
  const observed = production.events / production.trials;
  // Half an event more keeps the expected share within (0, 1); it must not make a difference where there is none.
  if (observed === baseline.events / baseline.trials) return 0;
  return signedRootDeviance(observed, (baseline.events + 0.5) / (baseline.trials + 1), effective);
}
