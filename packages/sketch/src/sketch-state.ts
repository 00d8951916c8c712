import { AtomTable } from "./atom-table.js";
import { ThresholdCounter, type ThresholdSet } from "./threshold-counter.js";

/** Distinct values that a sketch keeps exactly, as a multiple of its compression. */
export const EXACT_DISTINCT_FACTOR = 4;

/** What a sketch knows of the values that went through a flush. */
export class SketchState {
  readonly compression: number;
  finite = 0;
  missing = 0;
  nan = 0;
  positiveInfinity = 0;
  negativeInfinity = 0;
  min = Number.POSITIVE_INFINITY;
  max = Number.NEGATIVE_INFINITY;
  sum = 0;
  /** Entries, means ascending: weight > 0 is a run of one value, weight < 0 a mixed cluster. */
  means: Float64Array = NOTHING;
  weights: Float64Array = NOTHING;
  size = 0;
  /** False while every event sits on an entry of its own value (the sketch is exact). */
  compressed = false;
  /** The lowest compression of the passes that made the entries, those of merged sketches included. */
  coarsest: number;
  /** Was the last thing that happened to the entries the seal of an encoding? */
  sealed = false;
  /** The direction of the next merging pass. */
  descending = false;
  atoms: AtomTable;
  thresholds: ThresholdCounter | null;

  constructor(compression: number, thresholds: ThresholdSet | null, knownAtoms: readonly number[]) {
    this.compression = compression;
    this.coarsest = compression;
    this.atoms = new AtomTable(knownAtoms);
    this.thresholds = thresholds === null ? null : new ThresholdCounter(thresholds);
  }

  get exactLimit(): number {
    return EXACT_DISTINCT_FACTOR * this.compression;
  }

  clone(): SketchState {
    const copy = new SketchState(this.compression, null, []);
    copy.finite = this.finite;
    copy.missing = this.missing;
    copy.nan = this.nan;
    copy.positiveInfinity = this.positiveInfinity;
    copy.negativeInfinity = this.negativeInfinity;
    copy.min = this.min;
    copy.max = this.max;
    copy.sum = this.sum;
    copy.size = this.size;
    copy.compressed = this.compressed;
    copy.coarsest = this.coarsest;
    copy.sealed = this.sealed;
    copy.descending = this.descending;
    copy.means = this.means.slice(0, this.size);
    copy.weights = this.weights.slice(0, this.size);
    copy.atoms = this.atoms.clone();
    copy.thresholds = this.thresholds?.clone() ?? null;
    return copy;
  }

  /** Replaces the entries by `count` of the given arrays, from `start` on. */
  takeEntries(means: Float64Array, weights: Float64Array, start: number, count: number): void {
    if (this.means.length < count || this.means.length > 4 * count + SPARE) {
      this.means = new Float64Array(count + SPARE);
      this.weights = new Float64Array(count + SPARE);
    }
    this.means.set(means.subarray(start, start + count));
    this.weights.set(weights.subarray(start, start + count));
    this.size = count;
  }
}

const NOTHING = new Float64Array(0);
/** Room for a few entries more, so that a growing sketch does not allocate at every flush. */
const SPARE = 16;
