import type { CdfView } from "../cdf-view.js";
import { wassersteinScale } from "../wasserstein-scale.js";
import { newAtomRule, vanishedAtomRule } from "./atoms.js";
import { excessRule } from "./excess.js";
import { gapRule } from "./gap.js";
import { locationScaleRule } from "./location-scale.js";
import { mixtureRule } from "./mixture.js";
import type { Pattern } from "./pattern.js";
import { type PatternContext, patternContext } from "./pattern-context.js";
import { roundingRule } from "./rounding.js";
import { tailRule } from "./tails.js";
import { signFlipRule, unitRule } from "./units.js";

/** Largest |z| over the grid below which the sides are taken as the same. */
const SAME_BELOW = 3.7;

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
  tailRule,
  locationScaleRule,
];

/** Both sides hold values. */
export function findPatterns(baseline: CdfView, production: CdfView, designEffect: number): FoundPatterns {
  const m = production.n / designEffect;
  const early = [
    roundingRule(baseline, production),
    newAtomRule(baseline, production, m),
    vanishedAtomRule(baseline, production, m),
  ].filter((found) => found !== null);
  const scale = wassersteinScale(baseline);
  if (scale === null) return { first: early[0] ?? { kind: "cannot tell", figures: {} }, second: null };
  const context = patternContext(baseline, production, scale, designEffect);
  if (early.length === 0 && Math.max(...context.z.map(Math.abs)) < SAME_BELOW)
    return { first: { kind: "none", figures: {} }, second: null };
  const found = [...early];
  for (const rule of RULES) {
    if (found.length >= 2) break;
    const next = rule(context);
    if (next !== null && !found.some(({ kind }) => kind === next.kind)) found.push(next);
  }
  return { first: found[0] ?? { kind: "shape", figures: {} }, second: found[1] ?? null };
}
