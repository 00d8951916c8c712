import type { NumericSketch } from "@moorline/sketch";
import { freezeThresholds } from "@moorline/stats";

/** Share of the finite values from which on a value that repeats is counted apart in every segment. */
export const LEAST_ATOM_SHARE = 0.01;
export const MOST_ATOMS = 32;

/** The baseline's quantiles at the frozen ranks: what segments count events at, exactly. Empty without a finite value. */
export function thresholdValues(sketch: NumericSketch): readonly number[] {
  return freezeThresholds(sketch.toCdf()).map(({ value }) => value);
}

/** Values that repeat often enough to be counted apart, ascending. */
export function atomValues(sketch: NumericSketch): readonly number[] {
  const least = Math.max(2, LEAST_ATOM_SHARE * sketch.counts.finite);
  const frequent = sketch.atoms().filter(({ count }) => count >= least);
  frequent.sort((a, b) => b.count - a.count || a.value - b.value);
  return frequent
    .slice(0, MOST_ATOMS)
    .map(({ value }) => value)
    .sort((a, b) => a - b);
}
