import { eventsAt } from "../events-at.js";
import { GRID_RANKS } from "../grid-ranks.js";
import { quantileOf } from "../quantile-of.js";
import { wasserstein1 } from "../wasserstein1.js";
import type { Pattern } from "./pattern.js";
import { type PatternContext, zBetween } from "./pattern-context.js";
import { mirroredView, scaledView } from "./view-shape.js";

interface UnitChange {
  readonly factor: number;
  readonly offset: number;
  /** What becomes what. */
  readonly name: string;
}

/** Factors between units that people mix up (common practice, no source): what becomes what where values grow, and where they shrink. */
const FACTORS: readonly (readonly [factor: number, grows: string, shrinks: string])[] = [
  [1_000, "kilograms become grams", "grams become kilograms"],
  [
    100,
    "fractions become percents, or metres centimetres",
    "percents become fractions, or centimetres metres",
  ],
  [10, "centimetres become millimetres", "millimetres become centimetres"],
  [60, "minutes become seconds, or hours minutes", "seconds become minutes, or minutes hours"],
  [3_600, "hours become seconds", "seconds become hours"],
  [1_024, "kibibytes become bytes", "bytes become kibibytes"],
  [1e6, "seconds become microseconds", "microseconds become seconds"],
  [2.54, "inches become centimetres", "centimetres become inches"],
  [1.609344, "miles become kilometres", "kilometres become miles"],
  [2.20462, "kilograms become pounds", "pounds become kilograms"],
  [3.28084, "metres become feet", "feet become metres"],
];

const CHANGES: readonly UnitChange[] = [
  ...FACTORS.flatMap(([factor, grows, shrinks]) => [
    { factor, offset: 0, name: grows },
    { factor: 1 / factor, offset: 0, name: shrinks },
  ]),
  { factor: 1.8, offset: 32, name: "degrees Celsius become degrees Fahrenheit" },
  { factor: 1 / 1.8, offset: -32 / 1.8, name: "degrees Fahrenheit become degrees Celsius" },
  { factor: 1, offset: 273.15, name: "degrees Celsius become kelvin" },
  { factor: 1, offset: -273.15, name: "kelvin become degrees Celsius" },
];

/** How near the slope must come to a factor, how near the changed baseline to production, and how much nearer than before. */
const SLOPE_SLACK = 0.04;
const FIT = 0.03;
const BETTER = 4;
const RANKS_FIT = 3.7;
const LEAST_UNIT_DISTANCE = 0.25;
const LEAST_FLIP_DISTANCE = 0.3;

/** Production is the baseline in another unit. */
export function unitRule(context: PatternContext): Pattern | null {
  const { baseline, production, scale, line, m } = context;
  const distance = wasserstein1(baseline, production) / scale;
  if (distance < LEAST_UNIT_DISTANCE) return null;
  let best: (UnitChange & { readonly fit: number }) | null = null;
  for (const change of CHANGES) {
    if (Math.abs(Math.log(line.b / change.factor)) > SLOPE_SLACK + 3 / Math.sqrt(m)) continue;
    const changed = scaledView(baseline, change.factor, change.offset);
    const fit = wasserstein1(changed, production) / (change.factor * scale);
    if (fit < (best?.fit ?? Number.POSITIVE_INFINITY)) best = { ...change, fit };
  }
  if (best === null) return null;
  const fits = best.fit <= FIT + 2.2 / Math.sqrt(m) || largestLeft(context, best) < RANKS_FIT;
  if (!fits) return null;
  // The distance in production's own unit, so that a change to a smaller unit is measured alike.
  if (distance / Math.max(1, best.factor) < BETTER * best.fit && distance < BETTER * best.fit) return null;
  const { factor, offset, name } = best;
  return { kind: "unit change", figures: { factor, offset }, name };
}

/** Largest |z| over the grid between production and the baseline so changed: W1 of a heavy tail is chance for the most part, ranks are not. */
function largestLeft(context: PatternContext, { factor, offset }: UnitChange): number {
  const { baseline, production, effective, rankErrorAt } = context;
  return Math.max(
    ...GRID_RANKS.map((rank) => {
      const value = quantileOf(baseline, rank);
      const expected = eventsAt(baseline, value).upTo / baseline.n;
      const observed = eventsAt(production, factor * value + offset).upTo / production.n;
      return Math.abs(zBetween(observed, expected, effective, rankErrorAt(rank)));
    }),
  );
}

/** Production is the baseline with its sign turned. */
export function signFlipRule({ baseline, production, scale, m }: PatternContext): Pattern | null {
  const distance = wasserstein1(baseline, production) / scale;
  const flipped = wasserstein1(mirroredView(baseline), production) / scale;
  if (flipped > FIT + 2.2 / Math.sqrt(m)) return null;
  if (distance < LEAST_FLIP_DISTANCE || distance < BETTER * flipped) return null;
  return { kind: "sign flip", figures: { distance: distance * scale } };
}
