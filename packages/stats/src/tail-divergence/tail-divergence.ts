import type { DesignEffect } from "../design-effect.js";
import type { BothSides } from "../numeric-comparison.js";
import type { NumericSide } from "../numeric-side.js";
import { tailExceedance } from "../tail-exceedance.js";
import { thresholdsOf } from "../threshold-shares.js";
import { tailSentence } from "./tail-sentence.js";

/** Exceedance of one baseline quantile of one tail; the figures are null where the baseline does not reach the rank. */
export interface TailDivergence {
  readonly rank: number;
  readonly threshold: number | null;
  /** Share of production's values beyond the threshold. */
  readonly exceedance: number | null;
  /** The baseline's own share beyond it. */
  readonly expected: number | null;
  readonly ratio: number | null;
  /** 95 % interval of the ratio. */
  readonly interval: readonly [low: number, high: number] | null;
  readonly n: BothSides<number>;
  /** False when production's count was read from a digest; null without a count. */
  readonly exactCount: boolean | null;
  /** The same in words. */
  readonly sentence: string;
  /** Set, and true, when the baseline has fewer than five values beyond the rank, or production less than one expected there. */
  readonly beyondData?: true;
}

/** From the outer quarter's edge outward; the lower tail mirrors the upper. All are frozen ranks, so that counts are exact where kept. */
export const TAIL_RANKS = { lower: [0.05, 0.01, 0.001], upper: [0.95, 0.99, 0.999] } as const;

/** Values that a baseline must have beyond a rank for its tail to be spoken of. */
export const TAIL_SUPPORT = 5;

export interface TailDivergenceOptions {
  readonly designEffect?: DesignEffect;
}

/**
 * How much more of production lies beyond the baseline's p95, p99 and p99.9 (or p5, p1 and p0.1), each with its interval.
 *
 * Definition  `tailExceedance` at three frozen ranks of a tail.
 * Shape       both sides hold at least one value; three entries, from the body outward.
 * Accuracy    each interval holds with 95 % on its own, not all three at once.
 * Edges       fewer than five baseline values beyond the rank → no figures, `beyondData`. Less than one production value expected
 *             there → the figures are given, for the count is real and the interval says how little it proves, and `beyondData` too.
 * Source      docs/tail-exceedance.md
 */
export function tailDivergence(
  baseline: NumericSide,
  production: NumericSide,
  tail: "lower" | "upper",
  options: TailDivergenceOptions = {},
): readonly TailDivergence[] {
  const n = { baseline: baseline.cdf.n, production: production.cdf.n };
  return TAIL_RANKS[tail].map((rank) => {
    if (!reaches(n.baseline, rank, TAIL_SUPPORT)) return unreached(rank, n);
    const { threshold, exceedance, expected, ratio, interval, exactCount, inclusive } = tailExceedance({
      baseline: baseline.cdf,
      production: production.cdf,
      rank,
      tail,
      threshold: thresholdsOf(baseline).find((t) => t.rank === rank)!.value,
      thresholdCounts: { baseline: baseline.thresholdCounts, production: production.thresholdCounts },
      designEffect: options.designEffect ?? 1,
    });
    const figures = { rank, threshold, exceedance, expected, ratio, interval, n, exactCount };
    const told = { ...figures, sentence: tailSentence({ ...figures, tail, inclusive }) };
    return reaches(n.production, rank, 1) ? told : { ...told, beyondData: true };
  });
}

/** Are that many of n values expected beyond the rank? The slack lets 5,000 values reach .999 in spite of rounding. */
export function reaches(n: number, rank: number, values: number): boolean {
  return n * Math.min(rank, 1 - rank) * (1 + 1e-12) >= values;
}

function unreached(rank: number, n: BothSides<number>): TailDivergence {
  const none = { threshold: null, exceedance: null, expected: null, ratio: null, interval: null };
  return {
    rank,
    ...none,
    n,
    exactCount: null,
    sentence: tailSentence({ rank, n }),
    beyondData: true,
  };
}
