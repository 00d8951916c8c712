import type { Dependence } from "@moorline/baseline";
import {
  compareNumeric,
  compareVerdict,
  DEFAULT_DECISION_RULE,
  designEffectAt,
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
  /** What dependence between events does to band, p-values and intervals; null: nothing is known of it, events are taken as independent. */
  readonly dependence: ToldDependence | null;
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

export interface ToldDependence {
  /** What it was learnt from: the baseline's blocks by time or in the order of its rows. */
  readonly basis: "time" | "rows";
  /** By how much it inflates the variance of a share, at three ranks. */
  readonly designEffect: { readonly p1: number; readonly p50: number; readonly p99: number };
}

export interface CompareFeatureOptions {
  readonly unit?: string | null;
  readonly dependence?: Dependence | null;
}

/** Two sides of one feature, compared and judged without a time axis. */
export function compareFeature(
  feature: string,
  slice: string,
  baseline: NumericSide,
  production: NumericSide,
  { unit = null, dependence = null }: CompareFeatureOptions = {},
): FeatureComparison {
  const designEffect = dependence?.designEffect ?? 1;
  const middle = designEffectAt(designEffect, 0.5);
  const comparison = compareNumeric(baseline, production, { designEffect });
  const { state, sentence } = compareVerdict(comparison, DEFAULT_DECISION_RULE, designEffect);
  const pattern = readPattern(baseline, production, { unit, designEffect: middle });
  const { n, missing, ks, wasserstein, tails, tailRanks, psi, jensenShannon, pairs } = comparison;
  return {
    feature,
    kind: "numeric",
    slice,
    state,
    reading: withPattern(state, sentence, pattern),
    pattern,
    dependence: dependenceTold(dependence),
    n,
    missing,
    ks,
    wasserstein,
    tails,
    tailRanks,
    psi,
    jensenShannon,
    ...companionStatistics(baseline, production, middle),
    pairs,
    shift: shiftFunction(pairs),
  };
}

function dependenceTold(dependence: Dependence | null): ToldDependence | null {
  if (dependence === null || dependence.basis === "assumed") return null;
  const at = (rank: number) => designEffectAt(dependence.designEffect, rank);
  return { basis: dependence.basis, designEffect: { p1: at(0.01), p50: at(0.5), p99: at(0.99) } };
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

const UNTOLD: ReadonlySet<Reading["kind"]> = new Set(["none", "thin", "cannot tell"]);
