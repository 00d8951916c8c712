import { MoorlineError } from "@moorline/errors";
import { betaQuantile } from "./incomplete-beta.js";

/**
 * Clopper–Pearson interval for a binomial share.
 *
 * Definition  [Beta⁻¹(α/2; k, n − k + 1), Beta⁻¹(1 − α/2; k + 1, n − k)].
 * Shape       0 ≤ k ≤ n, n > 0; neither need be whole (a design effect divides both).
 * Units       share in [0, 1].
 * Accuracy    relative 1e-10; coverage is at least 1 − α by construction.
 * Edges       k = 0 → low 0; k = n → high 1.
 * Source      Clopper & Pearson 1934, doi:10.1093/biomet/26.4.404.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when k is not in [0, n] or n is not positive
 * @example clopperPearson(10, 10)[1] // => 1
 */
export function clopperPearson(
  events: number,
  trials: number,
  confidence = 0.95,
): readonly [low: number, high: number] {
  if (!(trials > 0 && events >= 0 && events <= trials)) {
    throw new MoorlineError("MOORLINE_INPUT_STATISTIC_DOMAIN", {
      name: "the event count",
      value: `${events} of ${trials}`,
      domain: "0 to the number of trials, which must be positive",
    });
  }
  const half = (1 - confidence) / 2;
  const low = events === 0 ? 0 : betaQuantile(half, events, trials - events + 1);
  const high = events === trials ? 1 : betaQuantile(1 - half, events + 1, trials - events);
  return [low, high];
}
