import type { ChanceLevel } from "../noise/chance-level.js";
import type { BothSides } from "../numeric-comparison.js";
import type { RateChange } from "../rates/rate-change.js";
import type { CategoryMover } from "./category-movers.js";
import type { ChiSquareTest } from "./homogeneity-test.js";
import type { NewCategory } from "./new-categories.js";
import type { TotalVariation } from "./total-variation.js";
import type { UnseenEvents } from "./unseen-events.js";
import type { VanishedCategory } from "./vanished-categories.js";

interface ComparisonCounts {
  readonly kind: "categorical";
  /** Events with a value: what the statistics are computed from. */
  readonly n: BothSides<number>;
  readonly events: BothSides<number>;
  /** Fraction of the events without a value; null without events. */
  readonly missing: BothSides<number | null>;
  /** Null without events on a side. */
  readonly missingChange: (RateChange & { readonly pValue: number }) | null;
  /** Categories with events that are kept. */
  readonly categories: BothSides<number>;
  /** Fraction of the values whose category is not kept; null without values. */
  readonly other: BothSides<number | null>;
  readonly designEffect: number;
}

/** Two sides compared. Plain numbers, strings, arrays and null only: it goes to JSON as it is. */
export interface ComparedCategories extends ComparisonCounts {
  readonly thin: false;
  readonly reason: null;
  /** Bins of g, chiSquare, psi, jensenShannon and totalVariation: categories, the rare ones pooled. */
  readonly bins: number;
  readonly g: ChiSquareTest;
  readonly chiSquare: ChiSquareTest;
  readonly psi: number;
  readonly psiNoise: ChanceLevel;
  readonly jensenShannon: number;
  readonly jensenShannonNoise: ChanceLevel;
  readonly totalVariation: TotalVariation;
  /** Never seen in the baseline; empty where the baseline has `other`, for it may have them there. */
  readonly new: readonly NewCategory[];
  /** Null where the baseline has `other`. */
  readonly unseen: UnseenEvents | null;
  readonly vanished: readonly VanishedCategory[];
  /** Every category, the furthest first. */
  readonly movers: readonly CategoryMover[];
}

/** A comparison that could not be made: a side without a value. */
export interface ThinCategories extends ComparisonCounts {
  readonly thin: true;
  /** Why, in words. */
  readonly reason: string;
  readonly bins: null;
  readonly g: null;
  readonly chiSquare: null;
  readonly psi: null;
  readonly psiNoise: null;
  readonly jensenShannon: null;
  readonly jensenShannonNoise: null;
  readonly totalVariation: null;
  readonly new: readonly [];
  readonly unseen: null;
  readonly vanished: readonly [];
  readonly movers: readonly [];
}

export type CategoricalComparison = ComparedCategories | ThinCategories;
