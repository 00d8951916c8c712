import type { PairsAnswer } from "@moorline/answers";
import type { NumericSketch } from "@moorline/sketch";
import { expect } from "vitest";
import { countBelow, countUpTo, type Raw, rawKs, rawQuantile, rawWasserstein } from "./brute-force.js";

/** One side of an answer: the rows that it stands for, and the sketch that it was read from. */
export interface Side {
  readonly raw: Raw;
  readonly sketch: NumericSketch;
}

/** One row of the table that a journey prints: what was answered, what the rows say, and how far apart the sketches' envelopes let them be. */
export interface Measured {
  readonly feature: string;
  readonly slice: string;
  readonly n: number;
  readonly exact: boolean;
  readonly ks: string;
  readonly ksExpected: string;
  readonly ksMiss: string;
  readonly ksAllowed: string;
  readonly w1: string;
  readonly w1Expected: string;
  readonly w1Miss: string;
  readonly w1Allowed: string;
  /** The worst pair: how far its rank is off, as a share of what the sketch's envelope allows there. */
  readonly worstPair: string;
}

/** What arithmetic alone may move a statistic that is exact. */
const ROUNDING = 1e-12;

/** Everything that an answer says of one feature and slice, against the raw rows: throws where it is not so, returns how far off it was. */
export function holdAgainstRows(answer: PairsAnswer, baseline: Side, production: Side): Measured {
  const n = { baseline: baseline.raw.sorted.length, production: production.raw.sorted.length };
  expect(answer.n).toEqual(n);
  expect(answer.missing).toEqual({ baseline: 0, production: 0 });
  const exact = baseline.sketch.exact && production.sketch.exact;
  const errors = [baseline, production].map(({ sketch }) => sketch.toCdf().rankErrorAt);
  const errorAt = (rankF: number, rankG: number) => errors[0]!(rankF) + errors[1]!(rankG);
  const ksExpected = rawKs(baseline.raw, production.raw);
  // The suprema of two distribution functions that are each known up to an error differ by at most the greatest error.
  const ksAllowed = Math.max(...Array.from({ length: 1_001 }, (_, i) => errorAt(i / 1_000, i / 1_000)));
  const ks = near(answer.ks!.distance, ksExpected, ksAllowed, "KS");
  const area = rawWasserstein(baseline.raw, production.raw, errorAt);
  const w1 = near(answer.wasserstein!.distance, area.distance, area.allowed, "W1");
  holdTails(answer, baseline, production);
  return {
    feature: answer.feature,
    slice: answer.slice,
    n: n.production,
    exact,
    ks: short(answer.ks!.distance),
    ksExpected: short(ksExpected),
    ksMiss: short(ks),
    ksAllowed: short(ksAllowed),
    w1: short(answer.wasserstein!.distance),
    w1Expected: short(area.distance),
    w1Miss: short(w1),
    w1Allowed: short(area.allowed),
    worstPair: short(worstPair(answer, baseline, production)),
  };
}

/** How far `actual` is off; throws where that is more than allowed. Where the sketches are exact `allowed` is 0. */
function near(actual: number, expected: number, allowed: number, what: string): number {
  const miss = Math.abs(actual - expected);
  const most = allowed + ROUNDING * (1 + Math.abs(expected));
  expect(miss, `${what}: ${actual}, by the rows ${expected}`).toBeLessThanOrEqual(most);
  return miss;
}

function worstPair(answer: PairsAnswer, baseline: Side, production: Side): number {
  expect(answer.pairs.length).toBeGreaterThan(20);
  return Math.max(
    ...answer.pairs.flatMap((pair) => [
      holdQuantile(pair.rank, pair.baseline, baseline),
      holdQuantile(pair.rank, pair.production, production),
    ]),
  );
}

/**
 * Exact: the type 7 quantile of the rows. Else the value must lie between the rows' quantiles at the rank less and the rank plus the stated error;
 * one row more, for between two rows every rank is as good. Returns the rank miss as a share of the stated error.
 */
function holdQuantile(rank: number, value: number | null, { raw, sketch }: Side): number {
  if (value === null) throw new Error(`no quantile at rank ${rank} of ${raw.sorted.length} values`);
  if (sketch.exact) {
    near(value, rawQuantile(raw, rank), 0, `quantile at ${rank}`);
    return 0;
  }
  const n = raw.sorted.length;
  const miss = Math.max(countBelow(raw, value) / n - rank, rank - countUpTo(raw, value) / n, 0);
  const allowed = sketch.toCdf().rankErrorAt(rank);
  expect(miss, `rank of the quantile at ${rank}, ${value}`).toBeLessThanOrEqual(allowed + 1 / n);
  return Math.max(0, miss - 1 / n) / allowed;
}

/** Thresholds are counted, not estimated: every count, and the headline of each tail, is the rows' own to the last event. */
function holdTails(answer: PairsAnswer, baseline: Side, production: Side): void {
  for (const { raw, sketch } of [baseline, production]) {
    const { values, counts } = sketch.thresholdCounts()!;
    expect(values.length).toBeGreaterThanOrEqual(5);
    expect(counts).toEqual(values.map((value) => countUpTo(raw, value)));
  }
  for (const tail of ["lower", "upper"] as const) {
    const { threshold, inclusive, exceedance, expected, exactCount } = answer.tails![tail]!;
    expect(exactCount).toBe(true);
    expect(exceedance).toBe(shareBeyond(production.raw, tail, threshold, inclusive));
    expect(expected).toBe(shareBeyond(baseline.raw, tail, threshold, inclusive));
  }
}

function shareBeyond(raw: Raw, tail: "lower" | "upper", threshold: number, inclusive: boolean): number {
  const n = raw.sorted.length;
  if (tail === "lower") return (inclusive ? countUpTo(raw, threshold) : countBelow(raw, threshold)) / n;
  return (n - (inclusive ? countBelow(raw, threshold) : countUpTo(raw, threshold))) / n;
}

function short(value: number): string {
  return value === 0 ? "0" : value.toPrecision(3);
}
