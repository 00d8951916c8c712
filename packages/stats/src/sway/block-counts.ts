import { MISSING } from "./watched-counts.js";

/**
 * Counts of one feature in the baseline's blocks, in the order of their time or of their rows: what its sway is learnt from.
 * Blocks stand close to each other: one in which nothing came has zeros.
 */
export interface BlockCounts {
  /** Length of a block in time; null where blocks follow the order of the rows. */
  readonly lengthMs: number | null;
  /** Start of the first block; null where blocks follow the order of the rows. */
  readonly startMs: number | null;
  /** By block. */
  readonly events: ArrayLike<number>;
  readonly missing: ArrayLike<number>;
  readonly finite: ArrayLike<number>;
  /** By frozen rank, then block: finite values at or below the threshold. */
  readonly atOrBelow: readonly ArrayLike<number>[];
}

/** What a watched share counts, by block. */
export function hitsOf(blocks: BlockCounts, share: number): ArrayLike<number> {
  return share === MISSING ? blocks.missing : blocks.atOrBelow[share]!;
}

/** What a watched share is a share of, by block. */
export function totalsOf(blocks: BlockCounts, share: number): ArrayLike<number> {
  return share === MISSING ? blocks.events : blocks.finite;
}

export function sumOf(values: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < values.length; i += 1) sum += values[i]!;
  return sum;
}

/** (count + ½)/(n + 1): never 0 or 1. */
export function smoothedShare(hits: number, total: number): number {
  return (hits + 0.5) / (total + 1);
}
