import {
  compareNumeric,
  compareVerdict,
  type NumericComparison,
  type NumericSide,
  type QuantilePair,
  type TailExceedance,
  type Verdict,
} from "@moorline/stats";
import { type CompanionStatistics, companionStatistics } from "./companion-statistics.js";

/** One feature and slice of `moorline compare --format json`: a contract, fields are only ever added. */
export interface FeatureComparison extends CompanionStatistics {
  readonly feature: string;
  readonly kind: "numeric";
  readonly slice: string;
  readonly state: Verdict["state"];
  readonly reading: string;
  readonly n: NumericComparison["n"];
  readonly missing: NumericComparison["missing"];
  readonly ks: NumericComparison["ks"];
  readonly wasserstein: NumericComparison["wasserstein"];
  readonly tails: { readonly lower: TailExceedance | null; readonly upper: TailExceedance | null } | null;
  readonly psi: number | null;
  readonly jensenShannon: number | null;
  readonly pairs: readonly QuantilePair[];
}

/** Two sides of one feature, compared and judged without a time axis. */
export function compareFeature(
  feature: string,
  slice: string,
  baseline: NumericSide,
  production: NumericSide,
): FeatureComparison {
  const comparison = compareNumeric(baseline, production);
  const { state, sentence } = compareVerdict(comparison);
  const { n, missing, ks, wasserstein, tails, psi, jensenShannon, pairs } = comparison;
  return {
    feature,
    kind: "numeric",
    slice,
    state,
    reading: sentence,
    n,
    missing,
    ks,
    wasserstein,
    tails,
    psi,
    jensenShannon,
    ...companionStatistics(baseline, production),
    pairs,
  };
}
