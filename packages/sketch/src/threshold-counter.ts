import { MoorlineError } from "@moorline/errors";

/** Values at which events are counted exactly; frozen from a baseline, whose content id it carries. */
export interface ThresholdSet {
  readonly id: string;
  /** At most 11 finite values, ascending. */
  readonly values: readonly number[];
}

/** Exact counts #{value ≤ threshold}, read off each flushed buffer. */
export interface ThresholdCounts {
  readonly id: string;
  readonly values: readonly number[];
  readonly counts: readonly number[];
}

export const MAX_THRESHOLDS = 11;
export const MAX_THRESHOLD_ID_LENGTH = 255;

export class ThresholdCounter {
  readonly id: string;
  readonly values: readonly number[];
  readonly counts: number[];

  constructor(set: ThresholdSet, counts?: readonly number[]) {
    checkThresholds(set);
    this.id = set.id;
    this.values = [...set.values];
    this.counts = counts === undefined ? set.values.map(() => 0) : [...counts];
  }

  /** Adds the counts of sorted values. */
  countSorted(sorted: Float64Array, count: number): void {
    for (let k = 0; k < this.values.length; k++) {
      this.counts[k] = this.counts[k]! + upperBound(sorted, 0, count, this.values[k]!);
    }
  }

  add(other: ThresholdCounter): void {
    for (let k = 0; k < this.counts.length; k++) this.counts[k] = this.counts[k]! + other.counts[k]!;
  }

  /** Same baseline and the same values: only then may counts be added. */
  matches(other: ThresholdCounter): boolean {
    return (
      this.id === other.id &&
      this.values.length === other.values.length &&
      this.values.every((value, k) => value === other.values[k])
    );
  }

  clone(): ThresholdCounter {
    return new ThresholdCounter(this, this.counts);
  }
}

function checkThresholds(set: ThresholdSet): void {
  const ascending = set.values.every((v, i) => Number.isFinite(v) && (i === 0 || v >= set.values[i - 1]!));
  if (!ascending || set.values.length > MAX_THRESHOLDS || set.id.length > MAX_THRESHOLD_ID_LENGTH) {
    throw new MoorlineError("MOORLINE_INPUT_SKETCH_THRESHOLDS", {
      values: set.values,
      limit: MAX_THRESHOLDS,
    });
  }
}

/** The first index in [from, to) whose value is greater than `value`, else `to`. */
export function upperBound(sorted: Float64Array, from: number, to: number, value: number): number {
  let low = from;
  let high = to;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (sorted[middle]! <= value) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** The first index in [from, to) whose value is not less than `value`, else `to`. */
export function lowerBound(sorted: Float64Array, from: number, to: number, value: number): number {
  let low = from;
  let high = to;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (sorted[middle]! < value) low = middle + 1;
    else high = middle;
  }
  return low;
}
