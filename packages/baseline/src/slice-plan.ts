import type { SliceRows } from "./baseline-manifest.js";
import type { RowBatch, RowTable } from "./files/row-table.js";

/** Rows that a slice needs for a baseline of its own: fewer say too little of a tail. */
export const LEAST_SLICE_ROWS = 1_000;

export interface SlicePlan {
  /** `all` first, then key by key, most rows first. */
  readonly kept: readonly SliceRows[];
  readonly leftOut: readonly SliceRows[];
  /** By slice column: value → index in `kept`. */
  readonly indexOf: readonly ReadonlyMap<string, number>[];
}

/** Which slices of the rows get parts of their own. */
export async function planSlices(table: RowTable, sliceLimit: number): Promise<SlicePlan> {
  const kept: SliceRows[] = [{ slice: "all", rows: table.rows }];
  const leftOut: SliceRows[] = [];
  const indexOf: Map<string, number>[] = [];
  for (const [column, { name }] of table.columns.slices.entries()) {
    const index = new Map<string, number>();
    const found = await table.session.rows(
      `select s${column}, cast(count(*) as double) as n from rows group by 1 order by n desc, 1 limit ${LISTED_SLICES}`,
    );
    for (const [value, rows] of found as [string, number][]) {
      const entry = { slice: `${name}=${value}`, rows };
      if (rows < LEAST_SLICE_ROWS || index.size >= sliceLimit) leftOut.push(entry);
      else index.set(value, kept.push(entry) - 1);
    }
    indexOf.push(index);
  }
  return { kept, leftOut: leftOut.slice(0, LISTED_LEFT_OUT), indexOf };
}

/** By slice: the rows of a batch that belong to it. */
export function membersOf(plan: SlicePlan, batch: RowBatch): readonly (readonly number[])[] {
  const members: number[][] = plan.kept.map(() => []);
  for (let row = 0; row < batch.rows; row += 1) members[0]!.push(row);
  for (const [column, index] of plan.indexOf.entries()) {
    const values = batch.slices[column]!;
    for (let row = 0; row < batch.rows; row += 1) {
      const slice = index.get(values[row]!);
      if (slice !== undefined) members[slice]!.push(row);
    }
  }
  return members;
}

const LISTED_SLICES = 10_200;
const LISTED_LEFT_OUT = 100;
