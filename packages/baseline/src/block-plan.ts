import { formatDuration } from "@moorline/config";
import type { BaselineBlocks } from "./baseline-manifest.js";
import type { RowTable } from "./files/row-table.js";

/** Which block a row belongs to, and in which order rows are read so that the rows of a block come together. */
export interface BlockPlan {
  readonly blocks: BaselineBlocks;
  /** Null: the order of the file. */
  readonly orderBy: string | null;
  /** -1: none. `row` counts from 0 in the order read. */
  readonly blockOf: (row: number, timeMs: number | null) => number;
}

/** Most blocks: 200 give the sway at scales up to 9 blocks with at least 7 replicates and room to spare. */
const MOST_BLOCKS = 200;
const FEWEST_BLOCKS = 8;
/** Most parts that blocks may have together, for they are stored: some 60 MB. */
const MOST_BLOCK_PARTS = 20_000;
const FEWEST_ROWS_IN_BLOCK = 500;

const MINUTE = 60_000;
const BLOCK_LENGTHS_MS = [1, 5, 10, 15, 30, 60, 120, 180, 240, 360, 720, 1_440, 2_880, 10_080, 40_320].map(
  (minutes) => minutes * MINUTE,
);

/** Blocks by time where rows have one, else by the order of the rows; none where there are too few rows. */
export async function planBlocks(table: RowTable, partsInBlock: number): Promise<BlockPlan> {
  const most = Math.max(FEWEST_BLOCKS, Math.min(MOST_BLOCKS, Math.floor(MOST_BLOCK_PARTS / partsInBlock)));
  if (table.columns.time !== null) {
    const plan = await blocksByTime(table, table.columns.time.name, most);
    if (plan !== null) return plan;
  }
  return blocksByRows(table, most);
}

async function blocksByTime(table: RowTable, column: string, most: number): Promise<BlockPlan | null> {
  const [row] = await table.session.rows(
    `select cast(min(t) as double), cast(max(t) as double), cast(count(t) as double), cast(count(*) filter (where t < before) as double)
     from (select t, lag(t) over (order by rowid) as before from rows)`,
  );
  const [first, last, timed, outOfOrder] = row as [number | null, number | null, number, number];
  if (first === null || last === null || last === first) return null;
  const lengthMs =
    BLOCK_LENGTHS_MS.find((length) => blockCount(first, last, length) <= most) ??
    Math.ceil((last - first + 1) / most);
  const count = blockCount(first, last, lengthMs);
  if (count < 2) return null;
  const start = Math.floor(first / lengthMs) * lengthMs;
  const untimed = table.rows - timed;
  const aside = untimed === 0 ? "" : `; ${untimed} rows without a time are in no block`;
  return {
    blocks: {
      by: "time",
      count,
      lengthMs,
      rowsEach: null,
      sentence: `${count} blocks of ${formatDuration(lengthMs)} by ${column}${aside}`,
    },
    orderBy: outOfOrder === 0 && untimed === 0 ? null : `floor(t / ${lengthMs}) nulls last, rowid`,
    blockOf: (_, timeMs) => (timeMs === null ? -1 : Math.floor((timeMs - start) / lengthMs)),
  };
}

function blockCount(first: number, last: number, lengthMs: number): number {
  return Math.floor(last / lengthMs) - Math.floor(first / lengthMs) + 1;
}

function blocksByRows(table: RowTable, most: number): BlockPlan {
  const count = Math.min(most, Math.floor(table.rows / FEWEST_ROWS_IN_BLOCK));
  if (count < 2) {
    const sentence = `no blocks: ${table.rows} rows are too few to see how the baseline itself varies`;
    const blocks = { by: "none", count: 0, lengthMs: null, rowsEach: null, sentence } as const;
    return { blocks, orderBy: null, blockOf: () => -1 };
  }
  const rowsEach = Math.ceil(table.rows / count);
  const used = Math.ceil(table.rows / rowsEach);
  return {
    blocks: {
      by: "rows",
      count: used,
      lengthMs: null,
      rowsEach,
      sentence: `${used} blocks of ${rowsEach} rows in the order of the file, for no column tells the time`,
    },
    orderBy: null,
    blockOf: (row) => Math.floor(row / rowsEach),
  };
}
