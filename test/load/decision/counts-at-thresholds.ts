import { FROZEN_RANKS, type WatchedCounts } from "@moorline/stats";

/** Counts values at or below each of eleven thresholds: a table finds the first threshold that can matter. */
export class CountsAtThresholds {
  readonly #thresholds: Float64Array;
  readonly #first = new Uint8Array(CELLS + 1);
  readonly #between = new Uint32Array(12);

  constructor(thresholds: readonly number[]) {
    this.#thresholds = Float64Array.from([...thresholds, Number.POSITIVE_INFINITY]);
    for (let cell = 0; cell <= CELLS; cell += 1) {
      const least = cell === 0 ? Number.NEGATIVE_INFINITY : cell / CELLS_A_UNIT - REACH;
      this.#first[cell] = this.#thresholds.findIndex((threshold) => threshold >= least);
    }
  }

  count(column: Float64Array): WatchedCounts {
    const between = this.#between.fill(0);
    const [first, thresholds] = [this.#first, this.#thresholds];
    for (let i = 0; i < column.length; i += 1) {
      const x = column[i]!;
      const cell = x <= -REACH ? 0 : x >= REACH ? CELLS : ((x + REACH) * CELLS_A_UNIT) | 0;
      let at = first[cell]!;
      while (x > thresholds[at]!) at += 1;
      between[at]! += 1;
    }
    let sum = 0;
    const atOrBelow = FROZEN_RANKS.map((_, share) => {
      sum += between[share]!;
      return sum;
    });
    return { events: column.length, missing: 0, finite: column.length, atOrBelow, belowLowest: null };
  }
}

const REACH = 8;
const CELLS_A_UNIT = 256;
const CELLS = 2 * REACH * CELLS_A_UNIT;
