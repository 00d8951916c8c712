import { jensenShannonNoise, populationStabilityNoise } from "../noise/chance-level.js";
import { jensenShannonDistance, populationStabilityIndex } from "../population-stability.js";
import { rateChange } from "../rates/rate-change.js";
import { rateChangePValue } from "../rates/rate-change-p-value.js";
import { alignCategories, type CategoryBin } from "./align-categories.js";
import type { CategoricalComparison, ThinCategories } from "./categorical-comparison.js";
import { type CategoryCounts, valuesOf } from "./category-counts.js";
import { categoryMovers } from "./category-movers.js";
import { homogeneityTest } from "./homogeneity-test.js";
import { newCategories } from "./new-categories.js";
import { poolRare } from "./pool-rare.js";
import { totalVariation } from "./total-variation.js";
import { type UnseenEvents, unseenEvents } from "./unseen-events.js";
import { vanishedCategories } from "./vanished-categories.js";

export interface CompareCategoriesOptions {
  /** By how much dependence inflates variances, ≥ 1. Default 1. */
  readonly designEffect?: number;
}

/**
 * Everything that is told of one categorical feature: whether the categories are shared out as in the baseline, how far they are not, which are new, which are
 * gone, which moved furthest, and what became of missing values.
 *
 * Shape   any two sides that add up; a side without a value gives a `thin` result with null in place of every statistic.
 * Edges   never NaN, never infinite: `JSON.parse(JSON.stringify(result))` equals the result. Names are data, whatever they are.
 * Cost    O(K log K) in the categories of both sides.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when a side does not add up
 * @example compareCategories(categoryCountsOf(["a"]), categoryCountsOf([null])).thin // => true
 */
export function compareCategories(
  baseline: CategoryCounts,
  production: CategoryCounts,
  { designEffect = 1 }: CompareCategoriesOptions = {},
): CategoricalComparison {
  const n = valuesOf(baseline);
  const m = valuesOf(production);
  const counts = countsOf(baseline, production, n, m, designEffect);
  if (n === 0 || m === 0) return thinComparison(counts, n === 0 ? "the baseline" : "production");
  const bins = alignCategories(baseline, production);
  const pooled = poolRare(bins, designEffect);
  const level = { bins: pooled.length, n, m, designEffect };
  return {
    ...counts,
    thin: false,
    reason: null,
    bins: pooled.length,
    ...homogeneityTest(
      [pooled.map((bin) => bin.baseline), pooled.map((bin) => bin.production)],
      designEffect,
    ),
    psi: populationStabilityIndex(pooled),
    psiNoise: populationStabilityNoise(level),
    jensenShannon: jensenShannonDistance(pooled),
    jensenShannonNoise: jensenShannonNoise(level),
    totalVariation: totalVariation(pooled, designEffect),
    new: newCategories(bins, m, designEffect),
    unseen: baseline.other > 0 ? null : unseenOf(bins, n, m, designEffect),
    vanished: vanishedCategories({ bins, n, m, designEffect }),
    movers: categoryMovers(bins, n, m, designEffect),
  };
}

function unseenOf(bins: readonly CategoryBin[], n: number, m: number, designEffect: number): UnseenEvents {
  const named = bins.filter(({ category }) => category !== null);
  const unseen = named.filter(({ baseline }) => baseline === 0).map(({ production }) => production);
  const singletons = named.filter(({ baseline }) => baseline === 1).length;
  return unseenEvents({ n, singletons, m, unseen, designEffect });
}

type Counts = Pick<
  ThinCategories,
  "kind" | "n" | "events" | "missing" | "missingChange" | "categories" | "other" | "designEffect"
>;

function countsOf(
  baseline: CategoryCounts,
  production: CategoryCounts,
  n: number,
  m: number,
  designEffect: number,
): Counts {
  const fraction = (part: number, whole: number) => (whole === 0 ? null : part / whole);
  return {
    kind: "categorical",
    n: { baseline: n, production: m },
    events: { baseline: baseline.events, production: production.events },
    missing: {
      baseline: fraction(baseline.missing, baseline.events),
      production: fraction(production.missing, production.events),
    },
    missingChange: missingChangeOf(baseline, production, designEffect),
    categories: { baseline: seenIn(baseline), production: seenIn(production) },
    other: { baseline: fraction(baseline.other, n), production: fraction(production.other, m) },
    designEffect,
  };
}

function missingChangeOf(
  baseline: CategoryCounts,
  production: CategoryCounts,
  designEffect: number,
): Counts["missingChange"] {
  if (baseline.events === 0 || production.events === 0) return null;
  const [before, now] = [baseline, production].map(({ missing, events }) => ({
    events: missing,
    trials: events,
  }));
  const change = rateChange(before!, now!, { designEffect });
  return { ...change, pValue: rateChangePValue(before!, now!, designEffect) };
}

function seenIn({ counts }: CategoryCounts): number {
  let seen = 0;
  for (const count of counts.values()) if (count > 0) seen += 1;
  return seen;
}

function thinComparison(counts: Counts, side: string): ThinCategories {
  return {
    ...counts,
    thin: true,
    reason: `${side} has no value`,
    bins: null,
    g: null,
    chiSquare: null,
    psi: null,
    psiNoise: null,
    jensenShannon: null,
    jensenShannonNoise: null,
    totalVariation: null,
    new: [],
    unseen: null,
    vanished: [],
    movers: [],
  };
}
