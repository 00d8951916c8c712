import { eventsAt } from "../events-at.js";
import { valueAtEvents } from "../quantile-of.js";
import type { Pattern } from "./pattern.js";
import { type PatternContext, zBetween } from "./pattern-context.js";

const RANKS = [0.95, 0.98, 0.99, 0.995, 0.999] as const;
const LEAST_EXPECTED = 4;
const CRITICAL = 4.2;
/** Beside a tail that left the line, less is needed of the other one to say that both did. */
const CRITICAL_BESIDE = 3.2;
const HEAVIER = 1.4;
const LIGHTER = 0.6;
/** A median that moved this far beside one tail is the whole moving, not the tail. */
const MOVED = 0.25;

interface TailFound {
  readonly rank: number;
  readonly ratio: number;
  readonly z: number;
  readonly threshold: number;
}

/** One tail, or both, left the line that the middle lies on. */
export function tailRule(context: PatternContext): Pattern | null {
  const strong = { upper: tailOf(context, "upper", CRITICAL), lower: tailOf(context, "lower", CRITICAL) };
  const first = strong.upper ?? strong.lower;
  if (first === null) return null;
  const upper = strong.upper ?? beside(first, tailOf(context, "upper", CRITICAL_BESIDE));
  const lower = strong.lower ?? beside(first, tailOf(context, "lower", CRITICAL_BESIDE));
  const both = upper !== null && lower !== null;
  if (!both && Math.abs(medianShift(context)) >= MOVED) return null;
  const told = upper ?? lower!;
  return {
    kind: both ? "both tails" : upper !== null ? "upper tail" : "lower tail",
    figures: {
      rank: told.rank,
      ratio: told.ratio,
      threshold: told.threshold,
      ...(both && { lowerRank: lower.rank, lowerRatio: lower.ratio, lowerThreshold: lower.threshold }),
    },
  };
}

/** The weaker tail counts where it went the same way: both heavier or both lighter. */
function beside(first: TailFound, other: TailFound | null): TailFound | null {
  return other !== null && first.ratio > 1 === other.ratio > 1 ? other : null;
}

/** By how many robust standard deviations the median moved. */
export function medianShift({ x, y }: PatternContext): number {
  const middle = x.length >> 1;
  return y[middle]! - x[middle]!;
}

function tailOf(context: PatternContext, side: "upper" | "lower", critical: number): TailFound | null {
  const { baseline, production, median, scale, line, effective, m } = context;
  let found: TailFound | null = null;
  for (const rank of RANKS) {
    if (m * (1 - rank) < LEAST_EXPECTED) continue;
    const at = side === "upper" ? rank : 1 - rank;
    const value = valueAtEvents(baseline, at * baseline.n);
    const fitted = median + scale * (line.a + line.b * ((value - median) / scale));
    const { below, upTo } = eventsAt(production, fitted);
    const before = eventsAt(baseline, value);
    const expected = side === "upper" ? 1 - before.upTo / baseline.n : before.below / baseline.n;
    const observed = side === "upper" ? 1 - upTo / production.n : below / production.n;
    if (expected <= 0) continue;
    const z = zBetween(observed, expected, effective, context.rankErrorAt(at));
    const ratio = observed / expected;
    if (Math.abs(z) < critical || (ratio < HEAVIER && ratio > LIGHTER)) continue;
    if (found === null || Math.abs(z) > Math.abs(found.z)) found = { rank: at, ratio, z, threshold: fitted };
  }
  return found;
}
