import { effectiveEvents } from "../effective-events.js";
import { incompleteBeta } from "../incomplete-beta.js";
import { normalTwoSided } from "../special/normal.js";
import { type RateCounts, rateZ } from "./rate-change.js";
import { requireCounts } from "./wilson.js";

/** Effective events that each side must expect for z to be read as a normal deviate. */
const NORMAL_FROM = 10;

/**
 * Two-sided p-value of the change of a share, for many and for few events.
 *
 * Definition  where the smaller side expects at least 10 effective events of the rarer of "with" and "without": 2(1 − Φ(|z|)), z as in `rateChange`. Else
 *             twice the smaller tail of K, the production part of the t events of both sides, binomial of t trials with probability m/(n + m).
 * Shape       trials > 0 on both sides.
 * Accuracy    the binomial is conditional on t and conservative for shares that are not small (its variance is up to twice that of the exact law); z, read
 *             as a normal deviate, understates a tail of 10⁻⁴ to 10⁻⁹ by 1.3 to 1.5 times where 10 events are expected.
 * Edges       the same share on both sides → 1; one event more than none of any number → never below 2m/(n + m).
 * Source      conditional test: Przyborowski & Wilenski 1940, doi:10.1093/biomet/31.3-4.313.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when events are not in [0, trials] or trials are not positive
 * @example rateChangePValue({ events: 0, trials: 99 }, { events: 1, trials: 1 }) // => 0.02
 */
export function rateChangePValue(baseline: RateCounts, production: RateCounts, designEffect = 1): number {
  for (const { events, trials } of [baseline, production]) requireCounts(events, trials);
  const together = baseline.events + production.events;
  const all = baseline.trials + production.trials;
  const [before, now] = together * 2 <= all ? [baseline, production] : [rest(baseline), rest(production)];
  const share = (before.events + now.events) / all;
  const expected = (Math.min(before.trials, now.trials) * share) / designEffect;
  if (expected >= NORMAL_FROM) {
    return normalTwoSided(rateZ(before, now, effectiveEvents(before.trials, now.trials, designEffect)));
  }
  return conditional(before.events / designEffect, now.events / designEffect, now.trials / all);
}

function rest({ events, trials }: RateCounts): RateCounts {
  return { events: trials - events, trials };
}

/** Twice the smaller tail of the binomial, continued to counts that are not whole. */
function conditional(before: number, now: number, probability: number): number {
  const atLeast = now === 0 ? 1 : incompleteBeta(probability, now, before + 1);
  const atMost = before === 0 ? 1 : incompleteBeta(1 - probability, before, now + 1);
  return Math.min(1, 2 * Math.min(atLeast, atMost));
}
