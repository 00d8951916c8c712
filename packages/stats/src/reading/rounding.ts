import type { CdfView } from "../cdf-view.js";
import type { Pattern } from "./pattern.js";
import { type Atom, heaviestAtoms } from "./view-shape.js";

/** Values that make up a rounded feature at most. */
const MOST_VALUES = 32;
const COVERED = 0.9;
const COVERED_BEFORE = 0.5;
const FEWEST_VALUES = 3;

/** Production's most frequent values cover nearly all of it and the baseline's do not; or the other way round, where rounding ended. */
export function roundingRule(baseline: CdfView, production: CdfView): Pattern | null {
  const [before, now] = [heaviestAtoms(baseline, MOST_VALUES), heaviestAtoms(production, MOST_VALUES)];
  if (isRounded(now, before)) return rounded(now, 0);
  return isRounded(before, now) ? rounded(before, 1) : null;
}

function isRounded(atoms: readonly Atom[], others: readonly Atom[]): boolean {
  return atoms.length >= FEWEST_VALUES && covered(atoms) >= COVERED && covered(others) < COVERED_BEFORE;
}

function rounded(atoms: readonly Atom[], ended: 0 | 1): Pattern {
  const values = atoms.map(({ value }) => value).sort((a, b) => a - b);
  let step = Number.POSITIVE_INFINITY;
  for (let i = 1; i < values.length; i += 1) step = Math.min(step, values[i]! - values[i - 1]!);
  return { kind: "rounding", figures: { values: atoms.length, covered: covered(atoms), step, ended } };
}

function covered(atoms: readonly Atom[]): number {
  return atoms.reduce((sum, { share }) => sum + share, 0);
}
