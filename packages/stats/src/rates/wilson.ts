import { MoorlineError } from "@moorline/errors";
import { normalExceededBy } from "../special/normal.js";

const DEFAULT_CONFIDENCE = 0.95;
/** Solved once: a column may have a hundred thousand categories, each with limits on both sides. */
const DEFAULT_Z = normalExceededBy((1 - DEFAULT_CONFIDENCE) / 2);

/**
 * Wilson's score interval for a share.
 *
 * Definition  the shares π with |p − π| ≤ z·√(π(1 − π)/n): (p + z²/2n ± z·√(p(1 − p)/n + z²/4n²))/(1 + z²/n).
 * Shape       0 ≤ events ≤ trials, trials > 0; neither need be whole (a design effect divides both).
 * Units       shares in [0, 1].
 * Edges       events = 0 → low 0; events = trials → high 1. Coverage is .95 on average over shares, not at least .95: `clopperPearson` has that.
 * Source      Wilson 1927, doi:10.1080/01621459.1927.10502953; the same as R's prop.test without continuity correction.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when events are not in [0, trials] or trials are not positive
 * @example wilson(0, 10)[0] // => 0
 */
export function wilson(
  events: number,
  trials: number,
  confidence = DEFAULT_CONFIDENCE,
): readonly [low: number, high: number] {
  requireCounts(events, trials);
  const z = confidence === DEFAULT_CONFIDENCE ? DEFAULT_Z : normalExceededBy((1 - confidence) / 2);
  const p = events / trials;
  const square = (z * z) / trials;
  const middle = p + square / 2;
  const half = Math.sqrt(square * (p * (1 - p) + square / 4));
  return [
    events === 0 ? 0 : Math.max(0, (middle - half) / (1 + square)),
    events === trials ? 1 : Math.min(1, (middle + half) / (1 + square)),
  ];
}

/** Refuses counts that are no part of a whole. */
export function requireCounts(events: number, trials: number): void {
  if (trials > 0 && events >= 0 && events <= trials) return;
  throw new MoorlineError("MOORLINE_INPUT_STATISTIC_DOMAIN", {
    name: "the event count",
    value: `${events} of ${trials}`,
    domain: "0 to the number of trials, which must be positive",
  });
}
