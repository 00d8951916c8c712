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

/**
 * The value at a rank: type 7 of Hyndman & Fan (1996, doi:10.1080/00031305.1996.10473566), the default of R and NumPy, when the
 * knots are exact. Else the same rule with the sorted sample read off the knots: a knot of at least one event holds the
 * places below[i] … upTo[i] − 1, a cluster the place half an event under its middle; between them, linear.
 */
export function quantileAt(knots: CdfKnots, rank: number): number {
  const { values, n } = knots;
  const place = rank * (n - 1);
  let low = 0;
  let high = values.length - 1;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (lastPlace(knots, middle) < place) low = middle + 1;
    else high = middle;
  }
  const first = firstPlace(knots, low);
  if (low === 0 || first <= place) return values[low]!;
  const from = lastPlace(knots, low - 1);
  const share = Math.min(1, Math.max(0, (place - from) / (first - from)));
  const a = values[low - 1]!;
  const b = values[low]!;
  const difference = b - a;
  // a + share·difference is exact at both ends and overflows only for values near ±MAX_VALUE.
  if (difference < Number.POSITIVE_INFINITY) return Math.min(b, a + share * difference);
  return a * (1 - share) + b * share;
}

function firstPlace(knots: CdfKnots, i: number): number {
  const below = knots.below[i]!;
  const upTo = knots.upTo[i]!;
  return upTo - below >= 1 ? below : (below + upTo) / 2 - 0.5;
}

function lastPlace(knots: CdfKnots, i: number): number {
  const below = knots.below[i]!;
  const upTo = knots.upTo[i]!;
  return upTo - below >= 1 ? upTo - 1 : (below + upTo) / 2 - 0.5;
}
