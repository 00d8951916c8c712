import { MoorlineError } from "@moorline/errors";
import { gammaQuantile, gammaTails, gammaUpperQuantile } from "../special/incomplete-gamma.js";

/**
 * Exact interval for the mean of a Poisson count.
 *
 * Definition  [χ²⁻¹(α/2; 2K)/2, χ²⁻¹(1 − α/2; 2K + 2)/2].
 * Shape       K ≥ 0, not necessarily whole.
 * Units       events.
 * Accuracy    relative 1e-12; coverage at least 1 − α by construction.
 * Edges       K = 0 → low 0.
 * Source      Garwood 1936, doi:10.1093/biomet/28.3-4.437; the same as R's poisson.test.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when the count is negative
 * @example garwood(0)[0] // => 0
 */
export function garwood(count: number, confidence = 0.95): readonly [low: number, high: number] {
  requireCount(count);
  const half = (1 - confidence) / 2;
  return [count === 0 ? 0 : gammaQuantile(half, count), gammaUpperQuantile(half, count + 1)];
}

/**
 * Probability that a Poisson variable is at least `count`.
 *
 * Accuracy    relative 1e-12, also far out in the tail.
 * Edges       count 0 → 1; mean 0 → 0 for any count above 0.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when count or mean is negative
 * @example poissonTail(0, 3) // => 1
 */
export function poissonTail(count: number, mean: number): number {
  requireCount(count);
  requireCount(mean);
  return count === 0 ? 1 : gammaTails(count, mean).lower;
}

function requireCount(value: number): void {
  if (value >= 0) return;
  throw new MoorlineError("MOORLINE_INPUT_STATISTIC_DOMAIN", {
    name: "a Poisson count",
    value,
    domain: "0 and above",
  });
}
