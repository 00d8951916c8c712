import {
  type CategoricalComparison,
  type CategoricalVerdict,
  type CategoryCounts,
  type CategoryMover,
  categoricalVerdict,
  compareCategories,
  type NewCategory,
  type VanishedCategory,
} from "@moorline/stats";

/** One categorical feature and slice of `moorline compare --format json`: a contract, fields are only ever added. */
export interface CategoryComparison {
  readonly feature: string;
  readonly kind: "categorical";
  readonly slice: string;
  readonly state: CategoricalVerdict["state"];
  readonly reading: string;
  readonly n: CategoricalComparison["n"];
  readonly missing: CategoricalComparison["missing"];
  readonly missingChange: CategoricalComparison["missingChange"];
  /** Categories with events on each side, and how many of them are new and vanished; the lists may be shorter. */
  readonly categories: CategoricalComparison["categories"] & {
    readonly new: number;
    readonly vanished: number;
  };
  readonly g: CategoricalComparison["g"];
  readonly chiSquare: CategoricalComparison["chiSquare"];
  readonly psi: number | null;
  readonly psiNoise: CategoricalComparison["psiNoise"];
  readonly jensenShannon: number | null;
  readonly jensenShannonNoise: CategoricalComparison["jensenShannonNoise"];
  readonly totalVariation: number | null;
  /** What chance alone makes of it on average. */
  readonly totalVariationNoise: number | null;
  readonly unseen: CategoricalComparison["unseen"];
  /** At most 20, the most frequent first. */
  readonly new: readonly NewCategory[];
  /** At most 20, the most expected first. */
  readonly vanished: readonly VanishedCategory[];
  /** At most 10, the furthest first. */
  readonly movers: readonly CategoryMover[];
  /** Fraction of the values whose category is not kept. */
  readonly other: CategoricalComparison["other"];
}

const MOST_LISTED = 20;
const MOST_MOVERS = 10;

/** Two sides of one categorical feature, compared and judged without a time axis. */
export function compareCategoryFeature(
  feature: string,
  slice: string,
  baseline: CategoryCounts,
  production: CategoryCounts,
): CategoryComparison {
  const comparison = compareCategories(baseline, production);
  const { state, sentence } = categoricalVerdict(comparison);
  return {
    feature,
    kind: "categorical",
    slice,
    state,
    reading: sentence,
    n: comparison.n,
    missing: comparison.missing,
    missingChange: comparison.missingChange,
    categories: {
      ...comparison.categories,
      new: comparison.new.length,
      vanished: comparison.vanished.length,
    },
    g: comparison.g,
    chiSquare: comparison.chiSquare,
    psi: comparison.psi,
    psiNoise: comparison.psiNoise,
    jensenShannon: comparison.jensenShannon,
    jensenShannonNoise: comparison.jensenShannonNoise,
    totalVariation: comparison.totalVariation?.distance ?? null,
    totalVariationNoise: comparison.totalVariation?.noise ?? null,
    unseen: comparison.unseen,
    new: comparison.new.slice(0, MOST_LISTED),
    vanished: comparison.vanished.slice(0, MOST_LISTED),
    movers: comparison.movers.slice(0, MOST_MOVERS),
    other: comparison.other,
  };
}
