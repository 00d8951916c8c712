import { FROZEN_RANKS } from "../grid-ranks.js";

/** Shares that blocks are counted for: at or below each of the 11 frozen thresholds, then without a value. */
export const COUNTED = FROZEN_RANKS.length + 1;
/** Shares that the decision watches: those, then strictly below the lowest threshold. */
export const WATCHED = COUNTED + 1;
/** Index of the share of events without a value. */
export const MISSING = FROZEN_RANKS.length;
/** Index of the share strictly below the lowest threshold: where many baseline values are that very threshold, the others do not see what falls below it. */
export const BELOW_LOWEST = COUNTED;

/** The counts that everything watched is computed from, of one window or one block. */
export interface WatchedCounts {
  /** Everything that came: finite, missing and non-finite. */
  readonly events: number;
  readonly missing: number;
  readonly finite: number;
  /** By frozen rank: finite values at or below the baseline's threshold. */
  readonly atOrBelow: readonly number[];
  /** Finite values strictly below the lowest threshold; null where that is not watched. */
  readonly belowLowest: number | null;
}

/** Name of a watched share: `p` and the rank, `missing`, or `below p0.001`. */
export function watchedKey(index: number): string {
  if (index === BELOW_LOWEST) return `below p${FROZEN_RANKS[0]}`;
  return index === MISSING ? "missing" : `p${FROZEN_RANKS[index]}`;
}
