import { NumericSketch } from "@moorline/sketch";
import { encodeSegmentBody, type SegmentWrite } from "@moorline/store";
import type { SketchOptionsSource } from "./sketch-options.js";

/** The sketch flushes at 4,096 values: whole columns of that length are taken without a copy. */
const MOST_ROWS = 4096;
const FEWEST_ROWS = 64;
const FIRST_ROWS = 32;
const ROWS_GROWTH = 4;
/** Bounds the rows held by one pane and slice of a stream with very many features. */
const MOST_ROW_BYTES = 1024 * 1024;

/** Features transposed at once: their values of one row lie in one or two cache lines, and the rows outgrow the cache. */
const LANES = 8;
/** Shared: columns are filled and handed over before anything else runs. */
const columns = Array.from({ length: LANES }, () => new Float64Array(MOST_ROWS));
const column = columns[0]!;

/**
 * All features of one pane and slice. Events are kept as rows (one copy of the event's values), turned into columns when there are
 * enough, and each column goes into its feature's sketch.
 */
export class FeatureColumns {
  readonly #features: readonly string[];
  readonly #sketches: NumericSketch[];
  readonly #mostRows: number;
  #values: Float64Array;
  /** Made when the first event lacks a feature: most streams never do. */
  #missing: Uint8Array | null = null;
  #rows = 0;
  #anyMissing = false;
  #sketchBytes: number;
  events = 0;

  constructor(
    readonly slice: string,
    features: readonly string[],
    options: SketchOptionsSource,
  ) {
    this.#features = features;
    this.#sketches = features.map((feature) => new NumericSketch(options.optionsFor(slice, feature)));
    const rowBytes = Math.max(8, 8 * features.length);
    this.#mostRows = Math.max(FEWEST_ROWS, Math.min(MOST_ROWS, Math.floor(MOST_ROW_BYTES / rowBytes)));
    this.#values = new Float64Array(FIRST_ROWS * features.length);
    this.#sketchBytes = this.#measureSketches();
  }

  /** Bytes held: rows and, as of the last flush, sketches. */
  get heldBytes(): number {
    return this.#values.byteLength + (this.#missing?.byteLength ?? 0) + this.#sketchBytes;
  }

  /** Takes one event's values; returns by how much `heldBytes` changed. */
  add(values: Float64Array, missing: Uint8Array, anyMissing: boolean): number {
    const width = this.#features.length;
    const grown = this.#rows * width < this.#values.length ? 0 : this.#makeRoom();
    const at = this.#rows * width;
    this.#values.set(values, at);
    let marked = 0;
    if (anyMissing) {
      marked = this.#missing === null ? this.#values.length : 0;
      this.#missing ??= new Uint8Array(this.#values.length);
      this.#missing.set(missing, at);
      this.#anyMissing = true;
    }
    this.#rows++;
    this.events++;
    return grown + marked;
  }

  /** Puts the rows into the sketches; returns by how much `heldBytes` changed. */
  flush(): number {
    if (this.#rows === 0) return 0;
    const before = this.heldBytes;
    if (this.#anyMissing) {
      for (let f = 0; f < this.#sketches.length; f++) this.#flushWithGaps(f, this.#missing!);
      this.#missing!.fill(0);
    } else for (let f = 0; f < this.#sketches.length; f += LANES) this.#flushLanes(f);
    this.#anyMissing = false;
    this.#rows = 0;
    this.#sketchBytes = this.#measureSketches();
    return this.heldBytes - before;
  }

  toSegment(paneStartMs: number): SegmentWrite {
    this.flush();
    const encoded = this.#features.map((name, f): [string, Uint8Array] => [
      name,
      this.#sketches[f]!.encode(),
    ]);
    return { paneStartMs, slice: this.slice, events: this.events, body: encodeSegmentBody(encoded) };
  }

  #flushLanes(first: number): void {
    const lanes = Math.min(LANES, this.#sketches.length - first);
    if (lanes === LANES) transposeEight(this.#values, first, this.#features.length, this.#rows);
    for (let lane = 0; lane < lanes; lane++) {
      const into = columns[lane]!;
      if (lanes < LANES) this.#transpose(first + lane, into);
      this.#sketches[first + lane]!.addColumn(into, this.#rows);
    }
  }

  #transpose(f: number, into: Float64Array): void {
    const width = this.#features.length;
    const values = this.#values;
    for (let row = 0, at = f; row < this.#rows; row++, at += width) into[row] = values[at]!;
  }

  #flushWithGaps(f: number, missing: Uint8Array): void {
    const width = this.#features.length;
    const values = this.#values;
    const rows = this.#rows;
    let length = 0;
    for (let row = 0, at = f; row < rows; row++, at += width) {
      if (missing[at] === 0) column[length++] = values[at]!;
    }
    if (length > 0) this.#sketches[f]!.addColumn(column, length);
    if (length < rows) this.#sketches[f]!.addMissing(rows - length);
  }

  #makeRoom(): number {
    if (this.#rows >= this.#mostRows) return this.flush();
    const before = this.heldBytes;
    const length = Math.min(this.#mostRows, this.#rows * ROWS_GROWTH) * this.#features.length;
    const values = new Float64Array(length);
    values.set(this.#values);
    this.#values = values;
    if (this.#missing !== null) {
      const missing = new Uint8Array(length);
      missing.set(this.#missing);
      this.#missing = missing;
    }
    return this.heldBytes - before;
  }

  #measureSketches(): number {
    let bytes = 0;
    for (const sketch of this.#sketches) bytes += sketch.sizeInBytes();
    return bytes;
  }
}

/** Eight neighbouring features of every row into the shared columns. */
function transposeEight(values: Float64Array, first: number, width: number, rows: number): void {
  const [c0, c1, c2, c3, c4, c5, c6, c7] = columns as [
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
  ];
  for (let row = 0, at = first; row < rows; row++, at += width) {
    c0[row] = values[at]!;
    c1[row] = values[at + 1]!;
    c2[row] = values[at + 2]!;
    c3[row] = values[at + 3]!;
    c4[row] = values[at + 4]!;
    c5[row] = values[at + 5]!;
    c6[row] = values[at + 6]!;
    c7[row] = values[at + 7]!;
  }
}
