import type { BlockCounts } from "@moorline/stats";

/** Where the counts of one block stand in a row of the table: events, missing, finite, then one bin a threshold. */
const EVENTS = 0;
const MISSING = 1;
const FINITE = 2;
const BINS = 3;

/** Counts one feature's values block by block at the baseline's thresholds, exactly. */
export class BlockCounter {
  readonly #thresholds: Float64Array;
  readonly #blocks: number;
  readonly #width: number;
  readonly #table: Uint32Array;

  /** Thresholds ascending; empty for a feature without a finite value. */
  constructor(blocks: number, thresholds: readonly number[]) {
    this.#thresholds = Float64Array.from(thresholds);
    this.#blocks = blocks;
    this.#width = BINS + thresholds.length;
    this.#table = new Uint32Array(blocks * this.#width);
  }

  /** Null counts as missing; NaN and infinities as events without a finite value. */
  add(block: number, value: number | null): void {
    const row = block * this.#width;
    this.#table[row + EVENTS]! += 1;
    if (value === null) this.#table[row + MISSING]! += 1;
    else if (Number.isFinite(value)) {
      this.#table[row + FINITE]! += 1;
      const bin = this.#binOf(value);
      if (bin < this.#thresholds.length) this.#table[row + BINS + bin]! += 1;
    }
  }

  /** Counts at or below each threshold, by threshold, then block. */
  counts(lengthMs: number | null, startMs: number | null): BlockCounts {
    const column = (at: number) =>
      Uint32Array.from({ length: this.#blocks }, (_, block) => this.#table[block * this.#width + at]!);
    const atOrBelow: Uint32Array[] = [];
    for (let bin = 0; bin < this.#thresholds.length; bin += 1) {
      const own = column(BINS + bin);
      const before = atOrBelow[bin - 1];
      atOrBelow.push(before === undefined ? own : own.map((count, block) => count + before[block]!));
    }
    return {
      lengthMs,
      startMs,
      events: column(EVENTS),
      missing: column(MISSING),
      finite: column(FINITE),
      atOrBelow,
    };
  }

  /** Index of the first threshold that is not below the value; their number when all are. */
  #binOf(value: number): number {
    let low = 0;
    let high = this.#thresholds.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (this.#thresholds[middle]! < value) low = middle + 1;
      else high = middle;
    }
    return low;
  }
}
