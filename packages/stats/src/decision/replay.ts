import { type BlockCounts, hitsOf } from "../sway/block-counts.js";
import type { Tolerance } from "../sway/tolerance.js";
import { MISSING, WATCHED, type WatchedCounts } from "../sway/watched-counts.js";
import type { DecisionRule } from "./decision-rule.js";
import { type Evidence, singleEvidence, sustainedEvidence } from "./evidence.js";
import {
  blockSums,
  EMPTY_HISTORY,
  LONGEST_SCALE,
  rowWidth,
  type WindowHistory,
  withWindow,
} from "./window-history.js";

/** The strongest evidence that the rule finds in the baseline itself, by watched share. */
export interface Replay {
  /** Greatest |z| of a pool whose blocks were all off the same way. */
  readonly sustained: readonly number[];
  /** Greatest |z| of one window. */
  readonly single: readonly number[];
}

/** Evidence below this is never the one that decides. */
const LEAST_NOTED = 2;

/** Nothing was replayed: there are no blocks. */
export const NO_REPLAY: Replay = Object.freeze({
  sustained: new Array<number>(WATCHED).fill(0),
  single: new Array<number>(WATCHED).fill(0),
});

/**
 * Puts the baseline's blocks through the rule as if they were production, floors left out: what passes there is the feature being itself.
 *
 * Shape   windows are as many whole blocks as come closest to the tolerance's window, at least one.
 * Cost    O(blocks · shares · log blocks).
 */
export function replayBaseline(blocks: BlockCounts, tolerance: Tolerance, rule: DecisionRule): Replay {
  const sustained = new Array<number>(WATCHED).fill(0);
  const single = new Array<number>(WATCHED).fill(0);
  const note = (greatest: number[], found: readonly Evidence[]) => {
    for (const { share, z } of found) greatest[share] = Math.max(greatest[share]!, Math.abs(z));
  };
  const { lengthMs, startMs } = blocks;
  const each = lengthMs === null ? 1 : Math.max(1, Math.round(tolerance.windowMs / lengthMs));
  const own = lengthMs === null ? tolerance : tolerance.forWindow(each * lengthMs);
  let history: WindowHistory = EMPTY_HISTORY;
  for (let first = 0; first + each <= blocks.events.length; first += each) {
    const endMs = lengthMs === null ? null : startMs! + (first + each) * lengthMs;
    history = withWindow(history, windowOf(blocks, first, each), endMs, own, rule.persistence);
    for (let scale = 1; scale <= LONGEST_SCALE; scale *= 2) {
      const sums = blockSums(history, scale, rule.persistence, rowWidth(own));
      if (sums === null) continue;
      const look = { sums, scale, tolerance: own, rule, least: LEAST_NOTED, floored: false };
      note(sustained, sustainedEvidence(look));
    }
    const window = blockSums(history, 1, 1, rowWidth(own))!;
    const look = { sums: window, scale: 1, tolerance: own, rule, least: LEAST_NOTED, floored: false };
    note(single, singleEvidence(look));
  }
  return { sustained, single };
}

function windowOf(blocks: BlockCounts, first: number, length: number): WatchedCounts {
  const sum = (values: ArrayLike<number>) => {
    let total = 0;
    for (let block = first; block < first + length; block += 1) total += values[block]!;
    return total;
  };
  return {
    events: sum(blocks.events),
    missing: sum(blocks.missing),
    finite: sum(blocks.finite),
    atOrBelow: Array.from({ length: MISSING }, (_, share) => sum(hitsOf(blocks, share))),
    belowLowest: null,
  };
}
