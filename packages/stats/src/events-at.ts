import type { CdfView } from "./cdf-view.js";

/** Both one-sided limits of a CDF at a value, in events. */
export interface EventsAt {
  readonly below: number;
  readonly upTo: number;
}

/**
 * How many events lie below and up to a value.
 *
 * Definition  below = n·F(x−), upTo = n·F(x); the same between knots.
 * Units       x: the feature's unit; result: events (a fraction of one where a sketch interpolates).
 * Edges       n = 0 → 0 and 0; before the first knot 0; after the last n.
 * Cost        O(log knots).
 *
 * @example eventsAt(cdfOf([1, 2, 2]), 2) // => { below: 1, upTo: 3 }
 */
export function eventsAt(view: CdfView, x: number): EventsAt {
  const { values, below, upTo } = view;
  const i = firstAtLeast(values, x);
  if (i < values.length && values[i] === x) return { below: below[i]!, upTo: upTo[i]! };
  if (i === 0) return { below: 0, upTo: 0 };
  if (i === values.length) return { below: view.n, upTo: view.n };
  const events = upTo[i - 1]! + (below[i]! - upTo[i - 1]!) * positionBetween(x, values[i - 1]!, values[i]!);
  return { below: events, upTo: events };
}

/** Index of the first element ≥ target in an ascending array; its length when there is none. */
export function firstAtLeast(ascending: Float64Array, target: number): number {
  let low = 0;
  let high = ascending.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (ascending[middle]! < target) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Where x lies from `from` (0) to `to` (1), without overflow when the two are further apart than the greatest double. */
export function positionBetween(x: number, from: number, to: number): number {
  const width = to - from;
  if (Number.isFinite(width)) return (x - from) / width;
  return (x / 2 - from / 2) / (to / 2 - from / 2);
}
