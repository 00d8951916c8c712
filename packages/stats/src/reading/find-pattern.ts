import type { CdfView } from "../cdf-view.js";
import { wassersteinScale } from "../wasserstein-scale.js";
import { newAtomRule, vanishedAtomRule } from "./atoms.js";
import { excessRule } from "./excess.js";
import { gapRule } from "./gap.js";
import { locationScaleRule, proportionRule, smallMoveRule } from "./location-scale.js";
import { mixtureRule } from "./mixture.js";
import type { Pattern } from "./pattern.js";
import { type PatternContext, patternContext } from "./pattern-context.js";
import { roundingRule } from "./rounding.js";
import { sidesToRead } from "./sides-to-read.js";
import { tailRule } from "./tails.js";
import { signFlipRule, unitRule } from "./units.js";
import { unnamed } from "./unnamed.js";
import { isFewValued } from "./view-shape.js";

/** Largest |z| over the grid below which the sides are taken as the same. */
const SAME_BELOW = 3.7;
/** A spread so many orders of magnitude below the values leaves no digits to measure with. */
const MOST_SCALES = 1e12;

export interface FoundPatterns {
  readonly first: Pattern;
  /** What the next rule that matches would say; null without one. */
  readonly second: Pattern | null;
}

/** The rules in the order in which they speak. The first that matches is the reading, the second the runner-up. */
const RULES: readonly ((context: PatternContext) => Pattern | null)[] = [
  signFlipRule,
  unitRule,
  excessRule,
  gapRule,
  mixtureRule,
  proportionRule,
  tailRule,
  locationScaleRule,
  smallMoveRule,
];
/** Ratings and flags: a line through so few values, its tails and its gaps mean nothing. */
const FEW_VALUES_RULES: typeof RULES = [signFlipRule, unitRule, smallMoveRule];

/** Both sides hold values. */
export function findPatterns(baseline: CdfView, production: CdfView, designEffect: number): FoundPatterns {
  const m = production.n / designEffect;
  const early = [
    roundingRule(baseline, production),
    newAtomRule(baseline, production, m),
    vanishedAtomRule(baseline, production, m),
  ].filter((found) => found !== null);
  const { before, now, apartFrom } = sidesToRead(baseline, production, designEffect);
  const scale = wassersteinScale(before);
  if (scale === null || !isMeasurable(scale, before, now))
    return { first: early[0] ?? cannotMeasure(scale), second: early[1] ?? null };
  const context = patternContext(before, now, scale, designEffect);
  const apart = (pattern: Pattern): Pattern => (apartFrom === null ? pattern : { ...pattern, apartFrom });
  if (early.length === 0 && Math.max(...context.z.map(Math.abs)) < SAME_BELOW)
    return { first: apart({ kind: "none", figures: {} }), second: null };
  const found = [...early];
  for (const rule of isFewValued(baseline) ? FEW_VALUES_RULES : RULES) {
    if (found.length >= 2) break;
    const next = rule(context);
    if (next !== null && !found.some(({ kind }) => kind === next.kind)) found.push(apart(next));
  }
  return { first: found[0] ?? apart(unnamed(context)), second: found[1] ?? null };
}

function isMeasurable(scale: number, ...views: readonly CdfView[]): boolean {
  return views.every(({ values }) =>
    [values[0]!, values.at(-1)!].every((end) => Number.isFinite((end / scale) * MOST_SCALES)),
  );
}

function cannotMeasure(scale: number | null): Pattern {
  return { kind: "cannot tell", figures: scale === null ? {} : { scale } };
}
