import type { CdfView } from "./cdf-view.js";
import { positionBetween } from "./events-at.js";

/** Both one-sided limits of every view at one knot of their union, in events. The arrays are used again for the next knot. */
export interface UnionKnot {
  value: number;
  readonly below: Float64Array;
  readonly upTo: Float64Array;
}

/**
 * Visits the union of the knots of several CDFs in ascending order. Between two visited knots every CDF is linear, from `upTo` of the
 * first to `below` of the second.
 *
 * Cost   O(knots of all · views) time, one small allocation.
 */
export function walkUnion(views: readonly CdfView[], visit: (knot: UnionKnot) => void): void {
  const count = views.length;
  const next = new Int32Array(count);
  const knot = { value: 0, below: new Float64Array(count), upTo: new Float64Array(count) };
  for (;;) {
    let value = Number.POSITIVE_INFINITY;
    for (let s = 0; s < count; s += 1) {
      const { values } = views[s]!;
      if (next[s]! < values.length && values[next[s]!]! < value) value = values[next[s]!]!;
    }
    if (value === Number.POSITIVE_INFINITY) return;
    knot.value = value;
    for (let s = 0; s < count; s += 1) {
      const view = views[s]!;
      const i = next[s]!;
      if (i < view.values.length && view.values[i] === value) {
        knot.below[s] = view.below[i]!;
        knot.upTo[s] = view.upTo[i]!;
        next[s] = i + 1;
      } else {
        const between = eventsBetween(view, i, value);
        knot.below[s] = between;
        knot.upTo[s] = between;
      }
    }
    visit(knot);
  }
}

/** Events of a view up to x, which lies strictly between its knots `next` − 1 and `next`. */
export function eventsBetween({ values, below, upTo }: CdfView, next: number, x: number): number {
  return eventsUpTo(values, below, upTo, next, x);
}

/** The same of a view's arrays: what is called for every knot of a sweep. */
export function eventsUpTo(
  values: Float64Array,
  below: Float64Array,
  upTo: Float64Array,
  next: number,
  x: number,
): number {
  if (next === 0) return 0;
  const from = upTo[next - 1]!;
  if (next === values.length) return from;
  const rise = below[next]! - from;
  if (rise === 0) return from;
  const start = values[next - 1]!;
  const width = values[next]! - start;
  return (
    from +
    rise * (width < Number.POSITIVE_INFINITY ? (x - start) / width : positionBetween(x, start, values[next]!))
  );
}
