import { eventsAt } from "../events-at.js";
import { GRID_RANKS } from "../grid-ranks.js";
import { quantileOf } from "../quantile-of.js";
import type { Pattern, PatternKind } from "./pattern.js";
import { medianOf, type PatternContext, zBetween } from "./pattern-context.js";
import { medianShift } from "./tails.js";

/** Largest |z| over the grid that a line may leave where it is said to explain all. */
const EXPLAINED_BELOW = 3.7;
const Z_95 = 1.96;

/** Everything moved, or spread, or both, by at least a tenth of a standard deviation. */
export function locationScaleRule(context: PatternContext): Pattern | null {
  const { line, m } = context;
  const root = Math.sqrt(m);
  const moved = Math.abs(medianShift(context)) >= Math.max(0.1, (5 * line.b) / root);
  const spread = Math.abs(Math.log(line.b)) >= Math.max(0.1, 5.6 / root);
  if (!moved && !spread) return null;
  return found(context, moved && spread ? "location and scale" : moved ? "location" : "scale");
}

/** A smaller move or spread, where it alone explains what is seen: with many values a hair is evident. */
export function smallMoveRule(context: PatternContext): Pattern | null {
  const shift = medianShift(context);
  const { b } = context.line;
  const lines = [
    { kind: "location", a: shift, b: 1 },
    { kind: "scale", a: 0, b },
    { kind: "location and scale", a: shift, b },
  ] as const;
  const explains = lines.find((line) => largestLeft(context, line) < EXPLAINED_BELOW);
  return explains === undefined ? null : found(context, explains.kind);
}

/** All values multiplied by one factor: a gain that changed. Told where no line through the middle explains as much. */
export function proportionRule(context: PatternContext): Pattern | null {
  const { baseline, production, x, y, median, scale } = context;
  if (!(baseline.values[0]! > 0 && production.values[0]! > 0)) return null;
  const factor = medianOf(x.map((at, i) => (median + scale * y[i]!) / (median + scale * at)));
  // factor·X in the context's normal values: factor·(x + median/scale) − median/scale.
  const proportion = { a: ((factor - 1) * median) / scale, b: factor };
  if (!(largestLeft(context, proportion) < EXPLAINED_BELOW) || smallMoveRule(context) !== null) return null;
  const { figures } = found(context, "location and scale");
  return { kind: "location and scale", figures: { ...figures, factor, proportion: 1 } };
}

/** With the distribution-free 95 % interval of the median's move. */
function found(
  { baseline, production, scale, line, x, y, effective, rankErrorAt }: PatternContext,
  kind: PatternKind,
): Pattern {
  const middle = x.length >> 1;
  const half = (Z_95 * 0.5) / Math.sqrt(effective) + rankErrorAt(0.5);
  const median = quantileOf(baseline, 0.5);
  const [low, high] = [0.5 - half, 0.5 + half].map(
    (rank) => quantileOf(production, Math.min(1, Math.max(0, rank))) - median,
  );
  return {
    kind,
    figures: { shift: (y[middle]! - x[middle]!) * scale, low: low!, high: high!, factor: line.b },
  };
}

/** Largest |z| over the grid between production and the baseline moved by a and spread by b. */
function largestLeft(
  { baseline, production, median, scale, effective, rankErrorAt }: PatternContext,
  { a, b }: { readonly a: number; readonly b: number },
): number {
  return Math.max(
    ...GRID_RANKS.map((rank) => {
      const value = quantileOf(baseline, rank);
      const moved = median + scale * (a + b * ((value - median) / scale));
      const expected = eventsAt(baseline, value).upTo / baseline.n;
      const observed = eventsAt(production, moved).upTo / production.n;
      return Math.abs(zBetween(observed, expected, effective, rankErrorAt(rank)));
    }),
  );
}
