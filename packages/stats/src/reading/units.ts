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
  readonly name: string;
}

/** Pairs of units that people mix up (common practice, no source), both ways. */
const CHANGES: readonly UnitChange[] = [
  ...[
    [1_000, "thousandths", "thousands"],
    [100, "hundredths", "hundreds, or percent as fractions"],
    [10, "tenths", "tens"],
    [60, "seconds for minutes, or minutes for hours", "minutes for seconds, or hours for minutes"],
    [3_600, "seconds for hours", "hours for seconds"],
    [1_024, "bytes for kibibytes", "kibibytes for bytes"],
    [1e6, "millionths", "millions"],
    [2.54, "centimetres for inches", "inches for centimetres"],
    [1.609344, "kilometres for miles", "miles for kilometres"],
    [2.20462, "pounds for kilograms", "kilograms for pounds"],
    [3.28084, "feet for metres", "metres for feet"],
  ].flatMap(([factor, larger, smaller]) => [
    { factor: factor as number, offset: 0, name: larger as string },
    { factor: 1 / (factor as number), offset: 0, name: smaller as string },
  ]),
  { factor: 1.8, offset: 32, name: "degrees Fahrenheit for degrees Celsius" },
  { factor: 1 / 1.8, offset: -32 / 1.8, name: "degrees Celsius for degrees Fahrenheit" },
  { factor: 1, offset: 273.15, name: "kelvin for degrees Celsius" },
  { factor: 1, offset: -273.15, name: "degrees Celsius for kelvin" },
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
