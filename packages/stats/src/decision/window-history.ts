import type { Tolerance } from "../sway/tolerance.js";
import { MISSING, WATCHED, type WatchedCounts } from "../sway/watched-counts.js";

/**
 * Counts of the last windows, finer for the near past than for the far: level i holds the last runs of 2^i windows, each as one row of numbers.
 * Plain JSON; grows with the logarithm of what it reaches back over.
 */
export interface WindowHistory {
  /** Windows taken since it began. */
  readonly windows: number;
  /** End of the last window; null when none was given. */
  readonly lastEndMs: number | null;
  /** By level: rows after one another, oldest first. */
  readonly levels: readonly (readonly number[])[];
}

export const EMPTY_HISTORY: WindowHistory = Object.freeze({ windows: 0, lastEndMs: null, levels: [] });

/** Longest scale, in windows; a longer horizon sees what lasts longer. */
export const LONGEST_SCALE = 64;
/** Levels that the scales 1, 2, 4 … 64 read from: each block is eight rows long, or as many as it has windows. */
const LEVELS = 4;
const ROWS_A_BLOCK = 8;

/** Columns of a row: events, missing, finite, the eleven counts, those below the lowest threshold; for a seasonal feature the expected counts too. */
export const COLUMN = { events: 0, missing: 1, finite: 2, hits: 3, belowLowest: 14, expected: 15 } as const;

export function rowWidth(tolerance: Tolerance): number {
  return tolerance.isSeasonal ? COLUMN.expected + WATCHED : COLUMN.expected;
}

/** The history with one more window; a window that does not follow the last one begins it anew. */
export function withWindow(
  history: WindowHistory,
  window: WatchedCounts,
  endMs: number | null,
  tolerance: Tolerance,
  persistence: number,
): WindowHistory {
  const width = rowWidth(tolerance);
  const follows =
    endMs === null || history.lastEndMs === null || endMs - history.lastEndMs === tolerance.windowMs;
  const fits = (history.levels[0]?.length ?? 0) % width === 0;
  const before = follows && fits ? history : EMPTY_HISTORY;
  const windows = before.windows + 1;
  const most = persistence * ROWS_A_BLOCK * width;
  const levels: (readonly number[])[] = [];
  let row = rowOf(window, endMs, tolerance, width);
  for (let level = 0; level < LEVELS; level += 1) {
    const rows = before.levels[level] ?? [];
    if (windows % 2 ** level !== 0) levels.push(rows);
    else {
      if (level > 0) row = lastTwo(levels[level - 1]!, width);
      levels.push((rows.length >= most ? rows.slice(width) : rows).concat(row));
    }
  }
  return { windows, lastEndMs: endMs, levels };
}

function rowOf(window: WatchedCounts, endMs: number | null, tolerance: Tolerance, width: number): number[] {
  const row = [window.events, window.missing, window.finite, ...window.atOrBelow, window.belowLowest ?? 0];
  if (width === COLUMN.expected) return row;
  for (let share = 0; share < WATCHED; share += 1) {
    const total = share === MISSING ? window.events : window.finite;
    // A thousandth of an event is enough, and shorter in the store.
    row.push(Math.round(total * tolerance.expected(share, endMs) * 1_000) / 1_000);
  }
  return row;
}

function lastTwo(rows: readonly number[], width: number): number[] {
  const at = rows.length - 2 * width;
  const sums = rows.slice(at, at + width);
  for (let column = 0; column < width; column += 1) sums[column]! += rows[at + width + column]!;
  return sums;
}

/** Sums over the last blocks, the oldest first, and over all of them: `pool` and each block are `width` numbers long. */
export interface BlockSums {
  readonly blocks: number;
  readonly width: number;
  /** Block after block. */
  readonly each: Float64Array;
  readonly pool: Float64Array;
}

/**
 * Sums over the last `blocks` blocks of `scale` windows; null where the history is too short or the scale is not due now. What is returned holds
 * until the next call: it is made for every scale of every window, so that its arrays are used again.
 */
export function blockSums(
  history: WindowHistory,
  scale: number,
  blocks: number,
  width: number,
): BlockSums | null {
  const level = levelOf(scale);
  if (history.windows % (1 << level) !== 0) return null;
  const rows = history.levels[level]!;
  const rowsEach = scale >> level;
  let at = rows.length - blocks * rowsEach * width;
  if (at < 0) return null;
  const sums = scratchOf(blocks, width);
  const { each, pool } = sums;
  each.fill(0);
  pool.fill(0);
  for (let block = 0; block < blocks; block += 1) {
    const base = block * width;
    for (let row = 0; row < rowsEach; row += 1, at += width)
      for (let column = 0; column < width; column += 1) each[base + column]! += rows[at + column]!;
    for (let column = 0; column < width; column += 1) pool[column]! += each[base + column]!;
  }
  return sums;
}

/** Level that a scale's rows stand in: the scales up to 8 read single windows. */
function levelOf(scale: number): number {
  return Math.max(0, 28 - Math.clz32(scale));
}

/** By number of blocks and width; there are two or three of them. */
const SCRATCH: BlockSums[] = [];

function scratchOf(blocks: number, width: number): BlockSums {
  for (const one of SCRATCH) if (one.blocks === blocks && one.width === width) return one;
  const made = { blocks, width, each: new Float64Array(blocks * width), pool: new Float64Array(width) };
  SCRATCH.push(made);
  return made;
}
