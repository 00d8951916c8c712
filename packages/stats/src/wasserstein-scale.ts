import type { CdfView } from "./cdf-view.js";
import { quantileOf } from "./quantile-of.js";

/** A width below this share of the median's size is rounding, not spread. */
const CONSTANT_BELOW = 1e-9;

/** Rank ranges tried in turn, each with the width that it has for a standard normal distribution. */
const SPREADS = [
  { from: 0.25, to: 0.75, normalWidth: 1.349 },
  { from: 0.05, to: 0.95, normalWidth: 3.29 },
  { from: 0.01, to: 0.99, normalWidth: 4.652 },
] as const;

/**
 * The unit in which a Wasserstein distance is told for features of any unit: a robust standard deviation of the baseline.
 *
 * Definition  IQR/1.349; when that is 0, (q95 − q5)/3.29; when that is 0, (q99 − q1)/4.652; when that is 0, the same of the values
 *             other than the heaviest one.
 * Units       the feature's unit.
 * Edges       null for an empty or a constant baseline: no scale exists, and any other value is news of its own; a width below
 *             1e-9 of |median| counts as 0; unchanged by shifts, proportional to scale.
 * Cost        O(log knots); O(knots) in the last case.
 *
 * @example wassersteinScale(cdfOf([5, 5, 5])) // => null
 */
export function wassersteinScale(baseline: CdfView): number | null {
  if (baseline.n === 0) return null;
  return spreadOf(baseline) ?? spreadOf(withoutHeaviest(baseline));
}

function spreadOf(view: CdfView): number | null {
  if (view.n === 0) return null;
  const smallest = CONSTANT_BELOW * Math.abs(quantileOf(view, 0.5));
  for (const { from, to, normalWidth } of SPREADS) {
    const width = quantileOf(view, to) / normalWidth - quantileOf(view, from) / normalWidth;
    if (width * normalWidth > smallest) return Math.min(width, Number.MAX_VALUE);
  }
  return null;
}

/** The view of the values other than the one with the greatest jump. */
function withoutHeaviest(view: CdfView): CdfView {
  let heaviest = 0;
  for (let i = 1; i < view.values.length; i += 1) {
    if (jumpAt(view, i) > jumpAt(view, heaviest)) heaviest = i;
  }
  const removed = jumpAt(view, heaviest);
  const kept = (_: number, i: number) => i !== heaviest;
  const shifted = (events: number, i: number) => (i > heaviest ? events - removed : events);
  return {
    ...view,
    n: view.n - removed,
    values: view.values.filter(kept),
    below: view.below.map(shifted).filter(kept),
    upTo: view.upTo.map(shifted).filter(kept),
  };
}

function jumpAt(view: CdfView, i: number): number {
  return view.upTo[i]! - view.below[i]!;
}
