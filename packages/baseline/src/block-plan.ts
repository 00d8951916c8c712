import { formatDuration } from "@moorline/config";
import type { BaselineBlocks } from "./baseline-manifest.js";
import type { RowTable } from "./files/row-table.js";

/** Which block a row belongs to, and in which order rows are read. */
export interface BlockPlan {
  readonly blocks: BaselineBlocks;
  /** Null: the order of the file, where that is the order of time. */
  readonly orderBy: string | null;
  /** Start of the first block; null where blocks follow the order of the rows, or there are none. */
  readonly startMs: number | null;
  /** -1: none. `row` counts from 0 in the order read. */
  readonly blockOf: (row: number, timeMs: number | null) => number;
}

/** Most blocks: a fortnight of five minutes each. */
const MOST_BLOCKS = 4_096;
const FEWEST_BLOCKS = 8;
/** Most blocks of all features and slices together, for their counts are held in memory while rows are read: some 56 MB. */
const MOST_BLOCK_ROWS = 1_000_000;
const FEWEST_ROWS_IN_BLOCK = 500;

const MINUTE = 60_000;
const BLOCK_LENGTHS_MS = [1, 5, 10, 15, 30, 60, 120, 180, 240, 360, 720, 1_440, 2_880, 10_080, 40_320].map(
  (minutes) => minutes * MINUTE,
);

/**
 * Blocks by time where rows have one, else by the order of the rows; none where there are too few rows. By time they are as short as the shortest
 * horizon, where the baseline is not too long for that.
 */
export async function planBlocks(
  table: RowTable,
  series: number,
  shortestHorizonMs: number,
): Promise<BlockPlan> {
  const most = Math.max(FEWEST_BLOCKS, Math.min(MOST_BLOCKS, Math.floor(MOST_BLOCK_ROWS / series)));
  if (table.columns.time !== null) {
    const plan = await blocksByTime(table, table.columns.time.name, shortestHorizonMs, most);
    if (plan !== null) return plan;
  }
  return blocksByRows(table, most);
}

/** The shortest of the usual lengths, not below `leastMs`, of which at most `most` blocks reach from the first to the last time. */
export function blockLengthMs(firstMs: number, lastMs: number, leastMs: number, most = MOST_BLOCKS): number {
  const fitting = BLOCK_LENGTHS_MS.find(
    (length) => length >= leastMs && blockCount(firstMs, lastMs, length) <= most,
  );
  return fitting ?? Math.ceil((lastMs - firstMs + 1) / most);
}

async function blocksByTime(
  table: RowTable,
  column: string,
  shortestHorizonMs: number,
  most: number,
): Promise<BlockPlan | null> {
  const [row] = await table.session.rows(
    `select cast(min(t) as double), cast(max(t) as double), cast(count(t) as double), cast(count(*) filter (where t < before) as double)
     from (select t, lag(t) over (order by rowid) as before from rows)`,
  );
  const [first, last, timed, outOfOrder] = row as [number | null, number | null, number, number];
  if (first === null || last === null || last === first) return null;
  const lengthMs = blockLengthMs(first, last, shortestHorizonMs, most);
  const count = blockCount(first, last, lengthMs);
  if (count < 2) return null;
  const startMs = Math.floor(first / lengthMs) * lengthMs;
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
    orderBy: outOfOrder === 0 ? null : "t nulls last, rowid",
    startMs,
    blockOf: (_, timeMs) => (timeMs === null ? -1 : Math.floor((timeMs - startMs) / lengthMs)),
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
    return { blocks, orderBy: null, startMs: null, blockOf: () => -1 };
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
    startMs: null,
    blockOf: (row) => Math.floor(row / rowsEach),
  };
}
