import type { DriftPlace } from "./drift-place.js";

/** What the decision keeps from window to window: plain JSON, a few hundred bytes. */
export interface DecisionMemory {
  /** State as of the last window that was not thin. */
  readonly state: "holding" | "straining" | "adrift";
  /** End of the window in which that state began; null when no window end was given. */
  readonly sinceMs: number | null;
  /** The shares that are beyond tolerance now. */
  readonly streaks: readonly Streak[];
  /** Consecutive windows within tolerance since adrift; 0 otherwise. */
  readonly calmWindows: number;
  /** Where the feature last left tolerance; null while it holds. */
  readonly place: DriftPlace | null;
}

/** Consecutive windows in which one share was beyond tolerance in one direction. */
export interface Streak {
  readonly key: string;
  readonly direction: 1 | -1;
  readonly windows: number;
  /** End of the streak's first window. */
  readonly sinceMs: number | null;
  /** Events at or below the threshold (or missing), and all events, summed over the streak. */
  readonly events: number;
  readonly total: number;
  /** z of the last windows, oldest first. */
  readonly recentZ: readonly number[];
}

/** Memory of a feature that was never judged, or whose baseline changed. */
export const EMPTY_MEMORY: DecisionMemory = Object.freeze({
  state: "holding",
  sinceMs: null,
  streaks: [],
  calmWindows: 0,
  place: null,
});
