import type { CdfKnots } from "./cdf-knots.js";
import { lowerBound } from "./threshold-counter.js";

/** Share of events ≤ value: right-continuous. */
export function cdfAt(knots: CdfKnots, value: number): number {
  return eventsAt(knots, value, knots.upTo) / knots.n;
}

/** Share of events < value: the left limit of the CDF. */
export function cdfBelowAt(knots: CdfKnots, value: number): number {
  return eventsAt(knots, value, knots.below) / knots.n;
}

function eventsAt(knots: CdfKnots, value: number, onKnot: Float64Array): number {
  const { values, below, upTo, n } = knots;
  const at = lowerBound(values, 0, values.length, value);
  if (at === values.length) return n;
  if (values[at] === value) return onKnot[at]!;
  if (at === 0) return 0;
  const low = values[at - 1]! * 0.5;
  const share = (value * 0.5 - low) / (values[at]! * 0.5 - low);
  return upTo[at - 1]! + (below[at]! - upTo[at - 1]!) * Math.min(1, share);
}
