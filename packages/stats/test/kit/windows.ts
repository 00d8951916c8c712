import { compareNumeric } from "../../src/compare-numeric.js";
import type { NumericComparison } from "../../src/numeric-comparison.js";
import { type NumericSide, numericSideOf } from "../../src/numeric-side.js";

/** Evenly spaced normal quantiles would need an inverse; a logistic feature has one in closed form and a shape close enough. */
export function logistic(rank: number): number {
  return Math.log(rank / (1 - rank));
}

/** A sample without noise: `length` values at evenly spaced ranks, put through a transform. */
export function evenSample(
  length: number,
  transform: (value: number, rank: number) => number = (v) => v,
): number[] {
  return Array.from({ length }, (_, i) => {
    const rank = (i + 0.5) / length;
    return transform(logistic(rank), rank);
  });
}

/** The baseline of the decision tests: 20,000 values, none missing. */
export const BASELINE: NumericSide = numericSideOf(evenSample(20_000));

export function windowOf(values: readonly (number | null)[]): NumericComparison {
  return compareNumeric(BASELINE, numericSideOf(values));
}

/** Windows of 1,000 events, each named for what it does to the feature. */
export const WINDOWS = {
  same: () => windowOf(evenSample(1000)),
  /** 3 % of the values beyond the baseline's p99. */
  heavyUpperTail: () => windowOf(evenSample(1000, (v, rank) => (rank > 0.97 ? v + 3 : v))),
  /** 2.5 % of the values beyond p99: past the floor, not far enough in three windows. */
  slightlyHeavyUpperTail: () =>
    windowOf(evenSample(1000, (v, rank) => (rank > 0.975 && rank < 0.9985 ? 4.9 : v))),
  heavyLowerTail: () => windowOf(evenSample(1000, (v, rank) => (rank < 0.03 ? v - 3 : v))),
  /** A quarter of a logistic scale upwards: shares change by up to .06. */
  slightlyHigher: () => windowOf(evenSample(1000, (v) => v + 0.25)),
  muchHigher: () => windowOf(evenSample(1000, (v) => v + 2)),
  /** Beyond the body's floor the other way. */
  slightlyLower: () => windowOf(evenSample(1000, (v) => v - 0.25)),
  tenthMissing: () => windowOf([...evenSample(900), ...Array.from({ length: 100 }, () => null)]),
  allMissing: () => windowOf(Array.from({ length: 1000 }, () => null)),
  fewValues: () => windowOf(evenSample(20)),
  nothing: () => windowOf([]),
} as const;
