import { cdfOf } from "./cdf-of.js";
import type { CdfView } from "./cdf-view.js";

/** Exact counts of values at or below frozen thresholds, ascending, with the id of the baseline that they were frozen from. */
export interface ThresholdCounts {
  readonly id: string;
  readonly values: readonly number[];
  readonly counts: readonly number[];
}

/** One side of a numeric comparison. */
export interface NumericSide {
  /** The finite values. */
  readonly cdf: CdfView;
  /** Everything that came: finite, missing and non-finite. */
  readonly events: number;
  readonly missing: number;
  /** NaN and infinities. */
  readonly nonFinite: number;
  readonly thresholdCounts?: ThresholdCounts | null;
}

/**
 * A side from raw values: null and undefined count as missing, NaN and infinities as non-finite, the rest makes the exact CDF.
 *
 * @example numericSideOf([1, null, Number.NaN]).missing // => 1
 */
export function numericSideOf(values: Iterable<number | null | undefined>): NumericSide {
  const finite: number[] = [];
  let events = 0;
  let missing = 0;
  for (const value of values) {
    events += 1;
    if (value === null || value === undefined) missing += 1;
    else if (Number.isFinite(value)) finite.push(value);
  }
  return { cdf: cdfOf(finite), events, missing, nonFinite: events - missing - finite.length };
}
