import type { CategoryBin } from "./align-categories.js";

export interface VanishedCategory {
  readonly category: string;
  /** Of the baseline's values. */
  readonly baselineShare: number;
  /** As many were to be expected in production. */
  readonly expected: number;
  /** P(0) = (1 − p)^(m/D), p the baseline's share. */
  readonly zeroProbability: number;
  /** The same with the baseline a sample too: (n/(n + m))^(count/D), never below it. */
  readonly pValue: number;
}

export interface VanishedInput {
  readonly bins: readonly CategoryBin[];
  readonly n: number;
  readonly m: number;
  readonly designEffect?: number;
}

/** Over all categories of the baseline together, chance leaves one out in so many comparisons. */
const SHOWN_BELOW = 0.05;

/**
 * Categories of the baseline that production should have shown and did not, the most expected first.
 *
 * Definition  count 0 in production and p · (categories of the baseline) ≤ .05, Bonferroni over them.
 * Edges       a category that may lie within production's `other` is not among them.
 */
export function vanishedCategories({ bins, n, m, designEffect = 1 }: VanishedInput): VanishedCategory[] {
  const known = bins.filter(({ category, baseline }) => category !== null && baseline > 0);
  return known
    .filter(({ production }) => production === 0)
    .map(({ category, baseline }) => ({
      category: category!,
      baselineShare: baseline / n,
      expected: (baseline / n) * m,
      zeroProbability: Math.exp((m / designEffect) * Math.log1p(-baseline / n)),
      pValue: Math.exp((-baseline / designEffect) * Math.log1p(m / n)),
    }))
    .filter(({ pValue }) => pValue * known.length <= SHOWN_BELOW)
    .sort((a, b) => b.expected - a.expected);
}
