import { FROZEN_RANKS } from "../grid-ranks.js";

/** Shares that the decision watches: at or below each of the 11 frozen thresholds, then without a value. */
export const WATCHED = FROZEN_RANKS.length + 1;
/** Index of the share of events without a value. */
export const MISSING = FROZEN_RANKS.length;

/** The counts that everything watched is computed from, of one window or one block. */
export interface WatchedCounts {
  /** Everything that came: finite, missing and non-finite. */
  readonly events: number;
  readonly missing: number;
  readonly finite: number;
  /** By frozen rank: finite values at or below the baseline's threshold. */
  readonly atOrBelow: readonly number[];
}

/** Name of a watched share from window to window: `p` and the rank, or `missing`. */
export function watchedKey(index: number): string {
  return index === MISSING ? "missing" : `p${FROZEN_RANKS[index]}`;
}
