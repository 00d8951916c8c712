import { MoorlineError } from "@moorline/errors";
import type { Atom } from "./atom-table.js";
import { type CdfKnots, cdfKnotsOf } from "./cdf-knots.js";
import { cdfAt, cdfBelowAt } from "./cdf-lookup.js";
import { checkCompression, checkCount, checkValue } from "./check-arguments.js";
import { stateProblems } from "./check-invariants.js";
import { decodeState } from "./codec/decode-sketch.js";
import { encodeState } from "./codec/encode-sketch.js";
import { DEFAULT_COMPRESSION, LEAST_COMPRESSION } from "./compression.js";
import { flushSorted } from "./flush.js";
import { activeKernel } from "./kernel/active-kernel.js";
import type { KindCounts } from "./kind-counts.js";
import { listAtoms } from "./list-atoms.js";
import { mergeStates } from "./merge-states.js";
import { QuantileIndex } from "./quantile-index.js";
import { sealState } from "./seal.js";
import { SketchState } from "./sketch-state.js";
import type { ThresholdCounts, ThresholdSet } from "./threshold-counter.js";

/** Finite values between two flushes. Flushes follow the sequence of values alone, so that a replay gives the same bytes. */
export const FLUSH_SIZE = 4096;

const FIRST_BUFFER = 16;
/** Buffers double up to this many values, then grow by as many: thousands of them are half full at a time. */
const BUFFER_STEP = 1024;
const NOTHING = new Float64Array(0);

export interface SketchOptions {
  /** Working compression δ, default 200 (about 270 clusters; 130 when encoded). */
  readonly compression?: number;
  /** Values at which events are counted exactly. */
  readonly thresholds?: ThresholdSet;
  /** Values that are counted exactly from the first event on, at most 32: the baseline's atoms. */
  readonly knownAtoms?: readonly number[];
}

/**
 * A sketch of one numeric feature: a merging t-digest (Dunning & Ertl 2019, arXiv:1902.04023) with counts by kind, exact
 * threshold counts and atoms outside the digest. Exact until it has seen 4·compression distinct values.
 *
 * Invariants (checkInvariants names what is broken):
 *  1. Σ counts by kind = events; Σ entries + Σ atoms + buffered = finite events.
 *  2. Means ascend; pure entries have distinct values; min ≤ means ≤ max.
 *  3. Only pure entries exceed one unit of k.
 *  4. Uncompressed ⇒ every entry is pure: F is the empirical CDF.
 *  5. Threshold counts never descend and are at most the finite events.
 *
 * Reading never changes what a later value does: flush boundaries depend on the sequence of values alone.
 */
export class NumericSketch {
  #state: SketchState;
  #buffer: Float64Array = NOTHING;
  #buffered = 0;
  /** State with the buffer flushed, and its knots; forgotten at the next value. */
  #view: SketchState | null = null;
  #knots: CdfKnots | null = null;
  #quantiles: QuantileIndex | null = null;

  constructor(options: SketchOptions = {}) {
    const compression = checkCompression(options.compression ?? DEFAULT_COMPRESSION);
    this.#state = new SketchState(compression, options.thresholds ?? null, options.knownAtoms ?? []);
  }

  static #of(state: SketchState): NumericSketch {
    const sketch = new NumericSketch({ compression: state.compression });
    sketch.#state = state;
    return sketch;
  }

  /** Takes one value; NaN and ±Infinity are counted by kind. */
  add(value: number): void {
    this.#forgetView();
    if (value - value !== 0) this.#countNonFinite(value);
    else this.#push(value + 0);
  }

  /** Takes the first `length` values of a column; the same as add() for each, faster. */
  addColumn(values: Float64Array, length: number = values.length): void {
    checkCount(length, values.length);
    this.#forgetView();
    let at = 0;
    while (at < length) {
      if (this.#buffered === 0 && length - at >= FLUSH_SIZE && this.#flushColumn(values, at)) {
        at += FLUSH_SIZE;
        continue;
      }
      const stop = Math.min(length, at + FLUSH_SIZE - this.#buffered);
      this.#growBuffer(this.#buffered + stop - at);
      for (; at < stop; at++) {
        const value = values[at]!;
        if (value - value !== 0) this.#countNonFinite(value);
        else this.#buffer[this.#buffered++] = value + 0;
      }
      if (this.#buffered === FLUSH_SIZE) this.#flush();
    }
  }

  /** Counts events that had no value for this feature. */
  addMissing(count: number = 1): void {
    checkCount(count, Number.MAX_SAFE_INTEGER);
    this.#forgetView();
    this.#state.missing += count;
  }

  get counts(): KindCounts {
    const { missing, nan, positiveInfinity, negativeInfinity } = this.#state;
    const finite = this.#state.finite + this.#buffered;
    const events = finite + missing + nan + positiveInfinity + negativeInfinity;
    return { events, finite, missing, nan, positiveInfinity, negativeInfinity };
  }

  /** The smallest finite value, exactly; null when there is none. */
  get min(): number | null {
    const view = this.#viewed();
    return view.finite > 0 ? view.min : null;
  }

  /** The greatest finite value, exactly; null when there is none. */
  get max(): number | null {
    const view = this.#viewed();
    return view.finite > 0 ? view.max : null;
  }

  /** Sum of the finite values; stays at ±MAX_VALUE where it would leave the range of numbers. */
  get sum(): number {
    return this.#viewed().sum;
  }

  /** Is the CDF of this sketch the empirical CDF of its values? */
  get exact(): boolean {
    return !this.#viewed().compressed;
  }

  get compression(): number {
    return this.#state.compression;
  }

  /** Exact counts #{value ≤ threshold}; null without thresholds. */
  thresholdCounts(): ThresholdCounts | null {
    const counter = this.#viewed().thresholds;
    return counter === null ? null : { id: counter.id, values: counter.values, counts: [...counter.counts] };
  }

  /** Values that repeat, with their counts, ascending; at most 32. */
  atoms(): readonly Atom[] {
    return listAtoms(this.#viewed());
  }

  toCdf(): CdfKnots {
    this.#knots ??= cdfKnotsOf(this.#viewed());
    return this.#knots;
  }

  /**
   * The value at a rank; type 7 of Hyndman & Fan when exact.
   *
   * @throws MOORLINE_INPUT_RANK_RANGE when the rank is outside 0 to 1
   * @throws MOORLINE_STATE_EMPTY_SKETCH when there is no finite value
   */
  quantile(rank: number): number {
    if (!(rank >= 0 && rank <= 1)) throw new MoorlineError("MOORLINE_INPUT_RANK_RANGE", { rank });
    this.#quantiles ??= new QuantileIndex(this.#filledKnots());
    return this.#quantiles.valueAt(rank);
  }

  /** Share of events ≤ value (right-continuous). Throws like quantile(). */
  cdf(value: number): number {
    return cdfAt(this.#filledKnots(), checkValue(value));
  }

  /** Share of events < value (the left limit of cdf). Throws like quantile(). */
  cdfBelow(value: number): number {
    return cdfBelowAt(this.#filledKnots(), checkValue(value));
  }

  /** The bytes of docs/sketch-format.md. A compressed sketch is sealed on the way: half the clusters. */
  encode(): Uint8Array {
    return encodeState(sealState(this.#viewed(), activeKernel()));
  }

  /** @throws MOORLINE_FORMAT_SKETCH (or …_VERSION) when the bytes are not what encode() gives */
  static decode(bytes: Uint8Array): NumericSketch {
    return NumericSketch.#of(decodeState(bytes));
  }

  /**
   * Merges all sketches at once, in the order given; they are not changed. Counts, min and max are exact; threshold counts
   * are added when all sketches that saw an event carry the same ones, else dropped.
   */
  static merge(sketches: readonly NumericSketch[], options: { compression?: number } = {}): NumericSketch {
    const most = sketches.reduce((c, sketch) => Math.max(c, sketch.compression), LEAST_COMPRESSION);
    const fallback = sketches.length === 0 ? DEFAULT_COMPRESSION : most;
    const compression = checkCompression(options.compression ?? fallback);
    const states = sketches.map((sketch) => sketch.#viewed());
    return NumericSketch.#of(mergeStates(states, compression, activeKernel()));
  }

  /** What is wrong with this sketch: nothing, or a defect. */
  checkInvariants(): readonly string[] {
    return stateProblems(this.#viewed());
  }

  /** Memory held, about: for accounting. */
  sizeInBytes(): number {
    const state = this.#state;
    const view = this.#view === null || this.#view === state ? 0 : 16 * this.#view.means.length;
    const knots = this.#knots === null ? 0 : 64 * this.#knots.values.length;
    return (
      OBJECT_BYTES +
      16 * state.means.length +
      8 * this.#buffer.length +
      64 * state.atoms.rows.length +
      view +
      knots
    );
  }

  #filledKnots(): CdfKnots {
    const knots = this.toCdf();
    if (knots.n === 0) throw new MoorlineError("MOORLINE_STATE_EMPTY_SKETCH");
    return knots;
  }

  #forgetView(): void {
    this.#view = null;
    this.#knots = null;
    this.#quantiles = null;
  }

  /** The state as if the buffer were flushed; the buffer stays, so that reading moves no flush boundary. */
  #viewed(): SketchState {
    if (this.#view === null) {
      if (this.#buffered === 0) return this.#state;
      this.#view = this.#state.clone();
      flushInto(this.#view, this.#buffer, 0, this.#buffered);
    }
    return this.#view;
  }

  #countNonFinite(value: number): void {
    if (value > 0) this.#state.positiveInfinity++;
    else if (value < 0) this.#state.negativeInfinity++;
    else this.#state.nan++;
  }

  #push(value: number): void {
    if (this.#buffered === this.#buffer.length) this.#growBuffer(this.#buffered + 1);
    this.#buffer[this.#buffered++] = value;
    if (this.#buffered === FLUSH_SIZE) this.#flush();
  }

  #growBuffer(needed: number): void {
    if (needed <= this.#buffer.length) return;
    let length = Math.max(FIRST_BUFFER, this.#buffer.length);
    while (length < needed) length += Math.min(length, BUFFER_STEP);
    const grown = new Float64Array(length);
    grown.set(this.#buffer.subarray(0, this.#buffered));
    this.#buffer = grown;
  }

  #flush(): void {
    flushInto(this.#state, this.#buffer, 0, this.#buffered);
    this.#buffered = 0;
  }

  /** Flushes straight from a column; false, and nothing done, when not all values are finite. */
  #flushColumn(values: Float64Array, at: number): boolean {
    return flushInto(this.#state, values, at, FLUSH_SIZE);
  }
}

function flushInto(state: SketchState, values: Float64Array, from: number, count: number): boolean {
  const kernel = activeKernel();
  kernel.reserve(count, state.size + SLACK_ENTRIES);
  kernel.values.set(values.subarray(from, from + count));
  if (!kernel.sortValues(count)) return false;
  flushSorted(state, kernel, count);
  return true;
}

/** Objects and array headers of one sketch, measured. */
const OBJECT_BYTES = 800;

/** Atoms that are given up in a flush come back as entries. */
const SLACK_ENTRIES = 64;
