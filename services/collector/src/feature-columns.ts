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

/** One column, shared: it is filled and handed over before anything else runs. */
const column = new Float64Array(MOST_ROWS);

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
    for (let f = 0; f < this.#sketches.length; f++) this.#flushFeature(f);

    if (this.#anyMissing) this.#missing?.fill(0);
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

  #flushFeature(f: number): void {
    const width = this.#features.length;
    const values = this.#values;
    const rows = this.#rows;
    const sketch = this.#sketches[f]!;
    const missing = this.#anyMissing ? this.#missing : null;
    if (missing === null) {
      for (let row = 0, at = f; row < rows; row++, at += width) column[row] = values[at]!;
      sketch.addColumn(column, rows);
      return;
    }
    let length = 0;
    for (let row = 0, at = f; row < rows; row++, at += width) {
      if (missing[at] === 0) column[length++] = values[at]!;
    }
    if (length > 0) sketch.addColumn(column, length);
    if (length < rows) sketch.addMissing(rows - length);
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
