import {
  compareNumeric,
  compareVerdict,
  type NumericComparison,
  type NumericSide,
  type QuantilePair,
  type Reading,
  readPattern,
  type ShiftPoint,
  shiftFunction,
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
  /** What the comparison amounts to, with what its pattern amounts to where there is one. */
  readonly reading: string;
  readonly pattern: Reading;
  readonly n: NumericComparison["n"];
  readonly missing: NumericComparison["missing"];
  readonly ks: NumericComparison["ks"];
  readonly wasserstein: NumericComparison["wasserstein"];
  readonly tails: { readonly lower: TailExceedance | null; readonly upper: TailExceedance | null } | null;
  /** Exceedance at p5, p1, p0.1 and p95, p99, p99.9, each with its interval and in words. */
  readonly tailRanks: NumericComparison["tailRanks"];
  readonly psi: number | null;
  readonly jensenShannon: number | null;
  readonly pairs: readonly QuantilePair[];
  /** The pairs as difference and factor, with the same band. */
  readonly shift: readonly ShiftPoint[];
}

/** Two sides of one feature, compared and judged without a time axis. */
export function compareFeature(
  feature: string,
  slice: string,
  baseline: NumericSide,
  production: NumericSide,
  unit: string | null = null,
): FeatureComparison {
  const comparison = compareNumeric(baseline, production);
  const { state, sentence } = compareVerdict(comparison);
  const pattern = readPattern(baseline, production, { unit });
  const { n, missing, ks, wasserstein, tails, tailRanks, psi, jensenShannon, pairs } = comparison;
  return {
    feature,
    kind: "numeric",
    slice,
    state,
    reading: withPattern(state, sentence, pattern),
    pattern,
    n,
    missing,
    ks,
    wasserstein,
    tails,
    tailRanks,
    psi,
    jensenShannon,
    ...companionStatistics(baseline, production),
    pairs,
    shift: shiftFunction(pairs),
  };
}

/** A pattern is told of what is off; where all holds, or too little is known, it would be one word too many. */
function withPattern(
  state: Verdict["state"],
  sentence: string,
  { kind, sentence: pattern }: Reading,
): string {
  const isOff = state === "adrift" || state === "straining";
  return isOff && !UNTOLD.has(kind) ? `${sentence}. The pairs read: ${pattern}` : sentence;
}

const UNTOLD: ReadonlySet<Reading["kind"]> = new Set(["none", "thin", "cannot tell", "shape"]);
