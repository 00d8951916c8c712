import type { CdfView } from "../cdf-view.js";
import { effectiveEvents } from "../effective-events.js";
import { GRID_RANKS } from "../grid-ranks.js";
import { quantileOf } from "../quantile-of.js";
import { signedRootDeviance } from "../signed-root-deviance.js";
import { middleShare } from "./view-shape.js";

/** Both sides with what every rule asks for. Values are in the baseline's robust standard deviations from its median. */
export interface PatternContext {
  readonly baseline: CdfView;
  readonly production: CdfView;
  /** Effective events of production beside the baseline. */
  readonly effective: number;
  /** Effective events of production alone: what a size can be told to. */
  readonly m: number;
  readonly median: number;
  /** Robust standard deviation of the baseline. */
  readonly scale: number;
  /** Baseline quantiles at the grid's ranks. */
  readonly x: readonly number[];
  /** Production quantiles at the grid's ranks. */
  readonly y: readonly number[];
  /** Line y = a + b·x through the middle of the pairs; b > 0. */
  readonly line: { readonly a: number; readonly b: number };
  /** z of production's share at each baseline quantile. */
  readonly z: readonly number[];
  /** Envelope of the rank error of both sides together. */
  readonly rankErrorAt: (rank: number) => number;
}

export function patternContext(
  baseline: CdfView,
  production: CdfView,
  scale: number,
  designEffect: number,
): PatternContext {
  const median = quantileOf(baseline, 0.5);
  const normal = (value: number) => (value - median) / scale;
  const x = GRID_RANKS.map((rank) => normal(quantileOf(baseline, rank)));
  const y = GRID_RANKS.map((rank) => normal(quantileOf(production, rank)));
  const effective = effectiveEvents(baseline.n, production.n, designEffect);
  const rankErrorAt = (rank: number) => Math.hypot(baseline.rankErrorAt(rank), production.rankErrorAt(rank));
  return {
    baseline,
    production,
    effective,
    m: production.n / designEffect,
    median,
    scale,
    x,
    y,
    line: lineOf(x, y),
    z: GRID_RANKS.map((rank) => {
      const value = quantileOf(baseline, rank);
      const expected = middleShare(baseline, value);
      return zBetween(middleShare(production, value), expected, effective, rankErrorAt(expected));
    }),
    rankErrorAt,
  };
}

/** The rank error of a sketch has a standard deviation of half its envelope at most. */
export const ENVELOPE_DEVIATIONS = 2;

/** Signed-root deviance of two shares, kept off 0 and 1; a rank error adds its variance to that of the share. */
export function zBetween(observed: number, expected: number, effective: number, rankError: number): number {
  const least = 0.5 / (effective + 1);
  const e = Math.min(1 - least, Math.max(least, expected));
  const z = signedRootDeviance(Math.min(1, Math.max(0, observed)), e, effective);
  const variance = (e * (1 - e)) / effective;
  return z / Math.sqrt(1 + (rankError / ENVELOPE_DEVIATIONS) ** 2 / variance);
}

/** Theil–Sen: the median of the slopes between pairs of ranks in the middle, and the median of what it leaves. */
function lineOf(x: readonly number[], y: readonly number[]): { readonly a: number; readonly b: number } {
  const middle = GRID_RANKS.flatMap((rank, i) => (rank >= 0.1 && rank <= 0.9 ? [i] : []));
  const slopes: number[] = [];
  for (const [k, i] of middle.entries()) {
    for (const j of middle.slice(k + 1)) {
      if (x[j]! > x[i]!) slopes.push((y[j]! - y[i]!) / (x[j]! - x[i]!));
    }
  }
  const b = slopes.length === 0 ? 1 : medianOf(slopes);
  const a = medianOf(middle.map((i) => y[i]! - b * x[i]!));
  return { a, b };
}

export function medianOf(values: readonly number[]): number {
  const sorted = [...values].sort((p, q) => p - q);
  const half = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[half]! : (sorted[half - 1]! + sorted[half]!) / 2;
}
