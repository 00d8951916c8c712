import { eventsAt } from "../events-at.js";
import { valueAtEvents } from "../quantile-of.js";
import { mixtureRule } from "./mixture.js";
import type { Pattern } from "./pattern.js";
import { type PatternContext, zBetween } from "./pattern-context.js";

/** Ranks of the fitted baseline beyond which more than was expected is looked for, furthest first. */
const FAR_RANKS = [0.999, 0.995, 0.99] as const;
const LEAST_EXCESS = 0.003;
const LEAST_EVENTS = 8;
/** From this share on it is a second population. */
const MIXTURE_FROM = 0.05;
/** Evidence that there is more than was expected. */
const CRITICAL = 4.2;
/** What lies beyond is by itself: little of it in the first part of the way, and close together. */
const FIRST_PART = 0.4;
const CLOSE_TOGETHER = 0.5;

/** A small population of its own, far out: contamination; a larger one: mixture. */
export function excessRule(context: PatternContext): Pattern | null {
  for (const rank of FAR_RANKS) {
    const upper = excessBeyond(context, rank, "upper");
    const lower = excessBeyond(context, rank, "lower");
    const found =
      upper === null || (lower !== null && lower.figures["share"]! > upper.figures["share"]!) ? lower : upper;
    // Of a second population a part may lie within the first: what the other half lost tells its whole.
    if (found !== null) return found.kind === "mixture" ? (mixtureRule(context) ?? found) : found;
  }
  return null;
}

function excessBeyond(context: PatternContext, rank: number, side: "upper" | "lower"): Pattern | null {
  const { baseline, production, median, scale, line, m } = context;
  const fitted = (value: number) => median + scale * (line.a + line.b * ((value - median) / scale));
  const unfitted = (value: number) => median + (scale * ((value - median) / scale - line.a)) / line.b;
  const upper = side === "upper";
  const beyondIn = (events: { below: number; upTo: number }, n: number) =>
    upper ? (n - events.upTo) / n : events.below / n;
  /** Production's share beyond a value, less the fitted baseline's. */
  const excessAt = (value: number) =>
    beyondIn(eventsAt(production, value), production.n) -
    beyondIn(eventsAt(baseline, unfitted(value)), baseline.n);
  const edge = fitted(valueAtEvents(baseline, (upper ? rank : 1 - rank) * baseline.n));
  const share = excessAt(edge);
  if (share < Math.max(LEAST_EXCESS, LEAST_EVENTS / m)) return null;
  const expected = beyondIn(eventsAt(baseline, unfitted(edge)), baseline.n);
  const edgeRank = upper ? 1 - expected : expected;
  if (zBetween(share + expected, expected, context.effective, context.rankErrorAt(edgeRank)) < CRITICAL)
    return null;
  const end = upper ? production.values.at(-1)! : production.values[0]!;
  /** Where so much of the excess is left beyond. */
  const where = (left: number) => {
    let [near, far] = [edge, end];
    for (let step = 0; step < 40; step += 1) {
      const middle = near + (far - near) / 2;
      if (excessAt(middle) >= left * share) near = middle;
      else far = middle;
    }
    return near;
  };
  const [first, middle, last] = [where(0.75), where(0.5), where(0.15)];
  const way = Math.abs(middle - edge);
  if (Math.abs(first - edge) < FIRST_PART * way || Math.abs(last - first) > CLOSE_TOGETHER * way) return null;
  const isMixture = share >= MIXTURE_FROM;
  return {
    kind: isMixture ? "mixture" : "contamination",
    figures: {
      ...(isMixture && { atLeast: 1 }),
      share,
      at: middle,
      upper: upper ? 1 : 0,
      distance: (middle - median) / scale,
    },
  };
}
