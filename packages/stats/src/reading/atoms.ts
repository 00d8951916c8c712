import type { CdfView } from "../cdf-view.js";
import { eventsAt } from "../events-at.js";
import { GRID_RANKS } from "../grid-ranks.js";
import { quantileOf } from "../quantile-of.js";
import type { Pattern } from "./pattern.js";
import { zBetween } from "./pattern-context.js";
import { heaviestAtoms, isLattice, shareAt } from "./view-shape.js";

const LEAST_SHARE = 0.01;
const LEAST_EVENTS = 5;
const STANDARD_ERRORS = 4;
const LOOKED_AT = 8;
/** Largest |z| by which the rest of a lattice may miss what the one value leaves of it. */
const REST_FITS = 5;

/** A value that production repeats and the baseline does not: a limit where values pile up, else a filled-in default. */
export function newAtomRule(baseline: CdfView, production: CdfView, m: number): Pattern | null {
  for (const { value, share } of heaviestAtoms(production, LOOKED_AT)) {
    const before = shareAt(baseline, value);
    if (share * m < LEAST_EVENTS || !isMore(share, before, m, baseline.n)) continue;
    const clipped = clippedAt(baseline, production, value, share - before, m);
    if (clipped !== null) return { ...clipped, figures: { ...clipped.figures, share } };
    if (!isRestKept(baseline, production, value, (share - before) / (1 - before), m)) continue;
    return { kind: "default-fill", figures: { value, share, before } };
  }
  return null;
}

/** A value that the baseline repeats and production does not, or much less. */
export function vanishedAtomRule(baseline: CdfView, production: CdfView, m: number): Pattern | null {
  for (const { value, share: before } of heaviestAtoms(baseline, LOOKED_AT)) {
    const share = shareAt(production, value);
    if (share > before / 2 || !isMore(before, share, m, baseline.n)) continue;
    if (!isRestKept(baseline, production, value, (share - before) / (1 - before), m)) continue;
    return { kind: "vanished atom", figures: { value, share, before } };
  }
  return null;
}

function isMore(share: number, other: number, m: number, n: number): boolean {
  const pooled = (share * m + other * n) / (m + n);
  const error = Math.sqrt(pooled * (1 - pooled) * (1 / m + 1 / n));
  return share - other >= Math.max(LEAST_SHARE, STANDARD_ERRORS * error);
}

/**
 * Where every value repeats (counts, ratings, rounded readings), any move makes some values more and others fewer. One of them is the reading only if the others keep
 * their proportions: G = (1 − ε)F + ε·1[x ≥ value], ε below 0 for a value that is gone.
 */
function isRestKept(
  baseline: CdfView,
  production: CdfView,
  value: number,
  moved: number,
  m: number,
): boolean {
  if (!isLattice(baseline)) return true;
  return GRID_RANKS.every((rank) => {
    const x = quantileOf(baseline, rank);
    const expected = (1 - moved) * (eventsAt(baseline, x).upTo / baseline.n) + (x >= value ? moved : 0);
    return Math.abs(zOf(baseline, production, x, expected, m)) < REST_FITS;
  });
}

function zOf(baseline: CdfView, production: CdfView, x: number, expected: number, m: number): number {
  const error = Math.hypot(baseline.rankErrorAt(expected), production.rankErrorAt(expected));
  const effective = 1 / (1 / m + 1 / baseline.n);
  return zBetween(eventsAt(production, x).upTo / production.n, expected, effective, error);
}

/** The end of production's range holds what the baseline has beyond it. */
function clippedAt(
  baseline: CdfView,
  production: CdfView,
  value: number,
  more: number,
  m: number,
): Pattern | null {
  const { below, upTo } = eventsAt(baseline, value);
  const isUpper = value === production.values.at(-1);
  const isLower = value === production.values[0];
  if (isUpper === isLower) return null;
  const beyond = isUpper ? 1 - upTo / baseline.n : below / baseline.n;
  const slack = 0.35 * more + 4 * Math.sqrt(more / m) + 0.004;
  if (beyond <= 0 || Math.abs(beyond - more) > slack) return null;
  return { kind: "clipped", figures: { value, beyond, upper: isUpper ? 1 : 0 } };
}
