import type { CategoryCounts } from "./category-counts.js";

/** Counts of both sides that can be held against each other. */
export interface CategoryBin {
  /** Null for what cannot be told apart: categories that one of the sides does not keep. */
  readonly category: string | null;
  readonly baseline: number;
  readonly production: number;
}

/**
 * Both sides over the same categories.
 *
 * Definition  a category that a side does not keep has the count 0 there when that side has no `other`; else nobody knows, and it goes with both
 *             `other` into one bin without a name.
 * Shape       bins without events on both sides are left out; the order is that of the baseline's categories, then production's, then the nameless bin.
 * Cost        O(categories of both).
 */
export function alignCategories(baseline: CategoryCounts, production: CategoryCounts): CategoryBin[] {
  const bins: CategoryBin[] = [];
  const rest = { baseline: baseline.other, production: production.other };
  for (const [category, count] of baseline.counts) {
    const now = countOf(production, category);
    if (now === null) rest.baseline += count;
    else if (count + now > 0) bins.push({ category, baseline: count, production: now });
  }
  for (const [category, count] of production.counts) {
    if (baseline.counts.has(category) || count === 0) continue;
    if (baseline.other > 0) rest.production += count;
    else bins.push({ category, baseline: 0, production: count });
  }
  if (rest.baseline + rest.production > 0) bins.push({ category: null, ...rest });
  return bins;
}

/** The exact count of a category; null when it may lie within `other`. */
function countOf(side: CategoryCounts, category: string): number | null {
  return side.counts.get(category) ?? (side.other === 0 ? 0 : null);
}
