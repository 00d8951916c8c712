import { MoorlineError } from "@moorline/errors";
import type { CdfView } from "./cdf-view.js";

/**
 * The exact CDF view of a raw sample: a sorted copy with ties merged.
 *
 * Shape   values: finite, any order, any length; not changed and not kept.
 * Edges   an empty sample gives a view with n = 0; −0 and 0 are one value.
 * Cost    O(n log n) time, O(n) memory.
 *
 * @throws MOORLINE_INPUT_VALUE_NOT_FINITE when a value is NaN or infinite
 * @example [...cdfOf([3, 1, 3]).upTo] // => [1, 3]
 */
export function cdfOf(values: ArrayLike<number>): CdfView {
  const sorted = Float64Array.from(values);
  for (let i = 0; i < sorted.length; i += 1) {
    if (!Number.isFinite(sorted[i])) {
      throw new MoorlineError("MOORLINE_INPUT_VALUE_NOT_FINITE", { index: i, value: sorted[i] });
    }
    // A typed-array sort puts −0 before 0; adding 0 makes them the one value that they are.
    sorted[i] = sorted[i]! + 0;
  }
  sorted.sort();
  return mergeTies(sorted);
}

function mergeTies(sorted: Float64Array): CdfView {
  const n = sorted.length;
  const values = new Float64Array(n);
  const below = new Float64Array(n);
  const upTo = new Float64Array(n);
  let knots = 0;
  for (let start = 0; start < n; ) {
    let end = start + 1;
    while (end < n && sorted[end] === sorted[start]) end += 1;
    values[knots] = sorted[start]!;
    below[knots] = start;
    upTo[knots] = end;
    knots += 1;
    start = end;
  }
  return {
    n,
    values: values.slice(0, knots),
    below: below.slice(0, knots),
    upTo: upTo.slice(0, knots),
    exact: true,
    rankErrorAt: noRankError,
  };
}

function noRankError(): number {
  return 0;
}
