import { NumericSketch, type SketchOptions } from "@moorline/sketch";
import type { RowBatch } from "./files/row-table.js";
import { membersOf, type SlicePlan } from "./slice-plan.js";

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

  take(batch: RowBatch): void {
    if (this.#scratch.length < batch.rows) this.#scratch = new Float64Array(batch.rows);
    for (const [slice, rows] of membersOf(this.#slices, batch).entries()) {
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
}
