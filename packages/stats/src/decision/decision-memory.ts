import type { DriftPlace } from "./drift-place.js";
import type { Evidence } from "./evidence.js";
import { EMPTY_HISTORY, type WindowHistory } from "./window-history.js";

/** What the decision keeps from window to window: plain JSON, a few kilobytes. */
export interface DecisionMemory {
  /** State as of the last window that was not thin. */
  readonly state: "holding" | "straining" | "adrift";
  /** End of the window in which that state began; null when no window end was given. */
  readonly sinceMs: number | null;
  /** Counts of the last windows. */
  readonly history: WindowHistory;
  /** The strongest evidence of each scale as of when that scale was last looked at. */
  readonly standing: readonly Evidence[];
  /** Consecutive windows within tolerance since adrift; 0 otherwise. */
  readonly calmWindows: number;
  /** Where the feature last left tolerance; null while it holds. */
  readonly place: DriftPlace | null;
}

/** Memory of a feature that was never judged, or whose baseline changed. */
export const EMPTY_MEMORY: DecisionMemory = Object.freeze({
  state: "holding",
  sinceMs: null,
  history: EMPTY_HISTORY,
  standing: [],
  calmWindows: 0,
  place: null,
});
