import { eventsAt } from "../events-at.js";
import { valueAtEvents } from "../quantile-of.js";
import type { Pattern } from "./pattern.js";
import { type PatternContext, zBetween } from "./pattern-context.js";

const STEPS = 100;
const LEAST_MASS = 0.06;
const LEFT_OVER = 0.1;
const LEAST_BESIDE = 0.03;
/** The baseline as it was moved and stretched must have at least this there, too. */
const LEAST_MOVED = 0.04;
/** Evidence for fewer values than expected; more than elsewhere, as thousands of ranges are looked at. */
const CRITICAL = 6;
/** Rank error of a sketch that is allowed for, at most. */
const MOST_ERROR = 0.01;

/** A range in which the baseline has values and production hardly any, with production on both sides of it. */
export function gapRule(context: PatternContext): Pattern | null {
  const { baseline, production, median, scale, line, effective, rankErrorAt } = context;
  const ends = Array.from({ length: STEPS + 1 }, (_, i) =>
    i === 0 ? baseline.values[0]! : valueAtEvents(baseline, (i / STEPS) * baseline.n),
  );
  const before = ends.map((value) => eventsAt(baseline, value).upTo / baseline.n);
  const now = ends.map((value) => eventsAt(production, value).upTo / production.n);
  const unfitted = (value: number) => median + (scale * ((value - median) / scale - line.a)) / line.b;
  const moved = ends.map((value) => eventsAt(baseline, unfitted(value)).upTo / baseline.n);
  let best: Pattern | null = null;
  for (let from = 1; from < STEPS; from += 1) {
    if (now[from]! < LEAST_BESIDE) continue;
    for (let to = STEPS - 1; to > from; to -= 1) {
      const mass = before[to]! - before[from]!;
      if (mass < Math.max(LEAST_MASS, (best?.figures["before"] ?? 0) + 1e-9)) break;
      if (1 - now[to]! < LEAST_BESIDE) continue;
      const there = moved[to]! - moved[from]!;
      if (there < LEAST_MOVED) continue;
      const share = now[to]! - now[from]!;
      const expected = Math.min(mass, there);
      const error = Math.min(rankErrorAt(from / STEPS), MOST_ERROR);
      if (share > LEFT_OVER * expected + error) continue;
      if (zBetween(share, expected, effective, 0) > -CRITICAL) continue;
      best = {
        kind: "gap",
        figures: { from: ends[from]!, to: ends[to]!, before: mass, share },
      };
    }
  }
  return best;
}
