import { MoorlineError } from "@moorline/errors";

/**
 * Benjamini–Hochberg adjusted p-values: to find what moved among many with a bounded share of false finds.
 *
 * Definition  sorted ascending p_(1..K): adjusted_(i) = min over j ≥ i of K/j·p_(j), at most 1. Those with adjusted ≤ q are a set whose
 *             expected share of false finds is at most q, for independent or positively dependent tests.
 * Shape       p-values in [0, 1], any order; the result is in the order of the input.
 * Edges       none → none; one → itself.
 * Cost        O(K log K).
 * Source      Benjamini & Hochberg 1995, doi:10.1111/j.2517-6161.1995.tb02031.x; the same as R's p.adjust(method = "BH").
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when a p-value is not in [0, 1]
 * @example adjustBenjaminiHochberg([0.01, 0.02]) // => [0.02, 0.02]
 */
export function adjustBenjaminiHochberg(pValues: readonly number[]): number[] {
  return stepUp(pValues, 1);
}

/**
 * Benjamini–Yekutieli adjusted p-values: as Benjamini–Hochberg, times Σ 1/i, which holds for tests that depend on each other in any way.
 *
 * Source      Benjamini & Yekutieli 2001, doi:10.1214/aos/1013699998; the same as R's p.adjust(method = "BY").
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when a p-value is not in [0, 1]
 * @example adjustBenjaminiYekutieli([0.01, 0.02]) // => [0.03, 0.03]
 */
export function adjustBenjaminiYekutieli(pValues: readonly number[]): number[] {
  let factor = 0;
  for (let i = 1; i <= pValues.length; i += 1) factor += 1 / i;
  return stepUp(pValues, factor);
}

function stepUp(pValues: readonly number[], factor: number): number[] {
  for (const value of pValues) {
    if (value >= 0 && value <= 1) continue;
    throw new MoorlineError("MOORLINE_INPUT_STATISTIC_DOMAIN", {
      name: "a p-value",
      value,
      domain: "0 to 1",
    });
  }
  const count = pValues.length;
  const descending = pValues.map((_, i) => i).sort((a, b) => pValues[b]! - pValues[a]!);
  const adjusted = new Array<number>(count);
  let least = 1;
  for (const [i, at] of descending.entries()) {
    least = Math.min(least, ((factor * count) / (count - i)) * pValues[at]!);
    adjusted[at] = least;
  }
  return adjusted;
}
