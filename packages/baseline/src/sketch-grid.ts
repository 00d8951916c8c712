import { NumericSketch, type SketchOptions } from "@moorline/sketch";
import type { RowBatch } from "./files/row-table.js";
import type { SlicePlan } from "./slice-plan.js";

/** One sketch a feature and slice, fed from batches of rows. */
export class SketchGrid {
  /** By slice, then feature. */
  readonly sketches: readonly (readonly NumericSketch[])[];
  readonly #slices: SlicePlan;
  #scratch = new Float64Array(0);

  constructor(
    featureCount: number,
    slices: SlicePlan,
    optionsFor: (sliceIndex: number, featureIndex: number) => SketchOptions,
  ) {
    this.#slices = slices;
    this.sketches = slices.kept.map((_, slice) =>
      Array.from({ length: featureCount }, (__, feature) => new NumericSketch(optionsFor(slice, feature))),
    );
  }

  /** Takes the rows [from, to) of a batch. */
  take(batch: RowBatch, from: number = 0, to: number = batch.rows): void {
    const members = this.#membersOf(batch, from, to);
    if (this.#scratch.length < to - from) this.#scratch = new Float64Array(to - from);
    for (const [slice, rows] of members.entries()) {
      if (rows.length === 0) continue;
      for (const [feature, values] of batch.features.entries()) {
        this.#addRows(this.sketches[slice]![feature]!, values, rows);
      }
    }
  }

  #addRows(sketch: NumericSketch, values: readonly (number | null)[], rows: readonly number[]): void {
    let count = 0;
    for (const row of rows) {
      const value = values[row]!;
      if (value !== null) this.#scratch[count++] = value;
    }
    sketch.addColumn(this.#scratch, count);
    if (count < rows.length) sketch.addMissing(rows.length - count);
  }

  /** By slice: the rows that belong to it. */
  #membersOf(batch: RowBatch, from: number, to: number): number[][] {
    const members: number[][] = this.#slices.kept.map(() => []);
    for (let row = from; row < to; row++) members[0]!.push(row);
    for (const [column, index] of this.#slices.indexOf.entries()) {
      const values = batch.slices[column]!;
      for (let row = from; row < to; row++) {
        const slice = index.get(values[row]!);
        if (slice !== undefined) members[slice]!.push(row);
      }
    }
    return members;
  }
}
