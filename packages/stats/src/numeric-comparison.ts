import type { KsDistance } from "./ks-distance.js";
import type { QuantilePair } from "./quantile-pairs.js";
import type { TailDivergence } from "./tail-divergence/tail-divergence.js";
import type { TailExceedance } from "./tail-exceedance.js";
import type { ThresholdShare } from "./threshold-shares.js";

/** A figure of both sides. */
export interface BothSides<T> {
  readonly baseline: T;
  readonly production: T;
}

interface ComparisonCounts {
  readonly kind: "numeric";
  /** Finite values: what the statistics are computed from. */
  readonly n: BothSides<number>;
  /** Everything that came: finite, missing and non-finite. */
  readonly events: BothSides<number>;
  /** Fraction of the events without a value; null without events. */
  readonly missing: BothSides<number | null>;
  /** Fraction of the events that were NaN or infinite; null without events. */
  readonly nonFinite: BothSides<number | null>;
}

/** Two sides compared. Plain numbers, strings, arrays and null only: it goes to JSON as it is. */
export interface ComparedNumeric extends ComparisonCounts {
  readonly thin: false;
  readonly reason: null;
  readonly ks: KsDistance & { readonly pValue: number };
  readonly wasserstein: {
    /** In the feature's unit. */
    readonly distance: number;
    /** Over the baseline's robust standard deviation; null when the baseline is constant. */
    readonly scaled: number | null;
  };
  /** Headline exceedance of each tail; null when n does not reach even into the outer quarter. */
  readonly tails: { readonly lower: TailExceedance | null; readonly upper: TailExceedance | null };
  /** Exceedance at p5, p1, p0.1 and p95, p99, p99.9. */
  readonly tailRanks: {
    readonly lower: readonly TailDivergence[];
    readonly upper: readonly TailDivergence[];
  };
  readonly psi: number;
  readonly jensenShannon: number;
  readonly pairs: readonly QuantilePair[];
  readonly shares: readonly ThresholdShare[];
  /** Values strictly below the lowest threshold, where many baseline values are that very threshold; null elsewhere: the shares see them. */
  readonly belowLowest: ThresholdShare | null;
  /** True when production's shares are counts; false when some were read from a digest, hence approximate. */
  readonly exactCounts: boolean;
}

/** A comparison that could not be made: a side without a finite value. */
export interface ThinNumeric extends ComparisonCounts {
  readonly thin: true;
  /** Why, in words. */
  readonly reason: string;
  readonly ks: null;
  readonly wasserstein: null;
  readonly tails: null;
  readonly tailRanks: null;
  readonly psi: null;
  readonly jensenShannon: null;
  readonly pairs: readonly [];
  readonly shares: readonly [];
  readonly belowLowest: null;
  readonly exactCounts: null;
}

export type NumericComparison = ComparedNumeric | ThinNumeric;
