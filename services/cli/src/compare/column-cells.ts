import type { CategoryComparison, FeatureComparison } from "@moorline/answers";
import { categoryInWords } from "@moorline/stats";

export const NUMERIC_HEAD = [
  "feature",
  "slice",
  "state",
  "n",
  "missing",
  "KS",
  "at",
  "W1 scaled",
  "lower tail",
  "upper tail",
];

export const CATEGORICAL_HEAD = [
  "feature",
  "slice",
  "state",
  "n",
  "missing",
  "categories",
  "moved",
  "by chance",
  "new",
  "vanished",
  "furthest",
];

const NONE = "–";

/** A numeric column in a row of the table. */
export function numericCells(compared: FeatureComparison): string[] {
  const { ks, wasserstein, tails } = compared;
  const ratio = (tail: { readonly ratio: number } | null | undefined) =>
    tail == null ? NONE : `× ${figure(tail.ratio)}`;
  return [
    ...commonCells(compared),
    ks === null ? NONE : figure(ks.distance),
    ks === null ? NONE : figure(ks.at),
    wasserstein?.scaled == null ? NONE : figure(wasserstein.scaled),
    ratio(tails?.lower),
    ratio(tails?.upper),
  ];
}

/** A categorical column in a row of the table: how much moved (total variation), and which category furthest. */
export function categoricalCells(compared: CategoryComparison): string[] {
  const { totalVariation, totalVariationNoise, categories, movers } = compared;
  const furthest = movers[0];
  return [
    ...commonCells(compared),
    countOf(categories.production),
    totalVariation === null ? NONE : percent(totalVariation),
    totalVariationNoise === null ? NONE : percent(totalVariationNoise),
    countOf(categories.new),
    countOf(categories.vanished),
    furthest === undefined || furthest.difference === 0
      ? NONE
      : `${categoryInWords(furthest.category)} ${percent(furthest.baseline)} → ${percent(furthest.production)}`,
  ];
}

function commonCells(compared: FeatureComparison | CategoryComparison): string[] {
  const { feature, slice, state, n, missing } = compared;
  return [
    feature,
    slice,
    state,
    countOf(n.production),
    missing.production === null ? NONE : percent(missing.production),
  ];
}

function percent(share: number): string {
  return `${figure(share * 100)} %`;
}

function figure(value: number): string {
  return String(Number(value.toPrecision(3)));
}

export function countOf(count: number): string {
  return count.toLocaleString("en-US");
}
