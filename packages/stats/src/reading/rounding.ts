import type { CdfView } from "../cdf-view.js";
import type { Pattern } from "./pattern.js";
import { heaviestAtoms } from "./view-shape.js";

/** Values that make up a rounded feature at most. */
const MOST_VALUES = 32;
const COVERED = 0.9;
const COVERED_BEFORE = 0.5;
const FEWEST_VALUES = 3;

/** Production's most frequent values cover nearly all of it, the baseline's do not. */
export function roundingRule(baseline: CdfView, production: CdfView): Pattern | null {
  const now = heaviestAtoms(production, MOST_VALUES);
  if (now.length < FEWEST_VALUES || covered(now) < COVERED) return null;
  if (covered(heaviestAtoms(baseline, MOST_VALUES)) >= COVERED_BEFORE) return null;
  const values = now.map(({ value }) => value).sort((a, b) => a - b);
  let step = Number.POSITIVE_INFINITY;
  for (let i = 1; i < values.length; i += 1) step = Math.min(step, values[i]! - values[i - 1]!);
  return { kind: "rounding", figures: { values: now.length, covered: covered(now), step } };
}

function covered(atoms: readonly { readonly share: number }[]): number {
  return atoms.reduce((sum, { share }) => sum + share, 0);
}
