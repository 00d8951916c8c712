import type { DecisionGround } from "../decision/decide.js";
import { SHARE_RANKS } from "../decision/evidence.js";
import { LONGEST_SCALE } from "../decision/window-history.js";
import { BELOW_LOWEST } from "../sway/watched-counts.js";

/** Frozen ranks at which no pool of windows, however long, is expected to hold an effective event on either side: they cannot page. */
export function blindRanks({ tolerance, rule }: DecisionGround, eventsPerWindow: number): readonly number[] {
  return SHARE_RANKS.flatMap((rank, share) => {
    if (rank === null || share === BELOW_LOWEST) return [];
    const expected = tolerance.expected(share, null);
    for (let scale = 1; scale <= LONGEST_SCALE; scale *= 2) {
      const windows = scale * rule.persistence;
      const events = windows * eventsPerWindow;
      if (!tolerance.knows(windows, events, share)) continue;
      const effective = tolerance.effective(share, windows, events);
      if (effective * Math.min(expected, 1 - expected) >= rule.minExpected) return [];
    }
    return [rank];
  });
}
