import { adjustBenjaminiHochberg } from "../multiplicity/adjusted-p-values.js";
import { type RateChange, rateChange } from "../rates/rate-change.js";
import { rateChangePValue } from "../rates/rate-change-p-value.js";
import type { CategoryBin } from "./align-categories.js";

/** How one category's share changed. */
export interface CategoryMover extends RateChange {
  readonly category: string;
  /** Of this category by itself. */
  readonly pValue: number;
  /** Benjamini–Hochberg over all categories of the comparison. */
  readonly adjustedP: number;
}

/**
 * How every category's share changed, the furthest first.
 *
 * Shape   n, m > 0; the nameless bin is left out.
 * Cost    O(K log K).
 */
export function categoryMovers(
  bins: readonly CategoryBin[],
  n: number,
  m: number,
  designEffect = 1,
): CategoryMover[] {
  const named = bins.filter(({ category }) => category !== null);
  const changes = named.map(({ category, baseline, production }) => {
    const [before, now] = [
      { events: baseline, trials: n },
      { events: production, trials: m },
    ];
    return {
      category: category!,
      ...rateChange(before, now, { designEffect }),
      pValue: rateChangePValue(before, now, designEffect),
    };
  });
  const adjusted = adjustBenjaminiHochberg(changes.map(({ pValue }) => pValue));
  return changes
    .map((change, i) => ({ ...change, adjustedP: adjusted[i]! }))
    .sort((a, b) => Math.abs(b.difference) - Math.abs(a.difference));
}
