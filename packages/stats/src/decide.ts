import { holdingSentence, thinSentence } from "./compare-verdict.js";
import { type DecisionMemory, EMPTY_MEMORY, type Streak } from "./decision-memory.js";
import { DEFAULT_DECISION_RULE, type DecisionRule } from "./decision-rule.js";
import { type DriftPlace, placeOf, sentenceOf } from "./drift-place.js";
import type { NumericComparison } from "./numeric-comparison.js";
import { type BeyondShare, beyondShares } from "./streaks.js";
import { watchedShares } from "./watched-share.js";

export interface Decision {
  readonly state: "holding" | "straining" | "adrift" | "thin";
  /** To be passed with the next window. */
  readonly memory: DecisionMemory;
  /** Where tolerance is, or for an adrift feature was last, left furthest; null while holding or thin. */
  readonly place: DriftPlace | null;
  /** The decision in words with its figures. */
  readonly sentence: string;
}

/**
 * The state of a feature after one more window.
 *
 * Definition  A window is beyond tolerance when at some watched share the effect floor is passed and |z| ≥ zWindow.
 *             `straining` while one is and the pooled |z| of its streak reaches zStrain. `adrift` when one share was beyond in one
 *             direction for `persistence` consecutive windows and its pooled |z| reaches zPage, or when one window is far enough at
 *             once. `adrift` ends after `releaseAfter` consecutive windows within tolerance.
 *             A `thin` window neither advances nor clears anything, and does not end `adrift`.
 * Shape       memory: null at first and after a change of the baseline; windows in order, not overlapping, each once.
 * Edges       pure: the same arguments give the same decision, and memory goes through JSON unchanged. A window in which every value is missing
 *             is judged by its missing fraction.
 * Source      docs/decision.md
 */
export function decide(
  memory: DecisionMemory | null,
  comparison: NumericComparison,
  rule: DecisionRule = DEFAULT_DECISION_RULE,
  windowEndMs: number | null = null,
): Decision {
  const before = memory ?? EMPTY_MEMORY;
  const watched = watchedShares(comparison, rule.minEvents);
  const beyond = beyondShares(before.streaks, watched, rule, windowEndMs);
  const judgedKeys = new Set(watched.map((share) => share.key));
  const streaks = [
    ...beyond.map(({ streak }) => streak),
    ...before.streaks.filter((streak) => !judgedKeys.has(streak.key)),
  ];
  const thin = !watched.some((share) => share.part !== "missing");
  if (thin && beyond.length === 0) return thinDecision(before, streaks, comparison);
  const calmWindows = before.state === "adrift" && beyond.length === 0 ? before.calmWindows + 1 : 0;
  const state = nextState(before, beyond, calmWindows, rule);
  const strongest = state === "holding" ? undefined : beyond[0];
  const lasting = state === "adrift" ? before.place : null;
  const place = strongest === undefined ? lasting : placeOf(strongest.share, strongest.z);
  const sinceMs = state === before.state && memory !== null ? before.sinceMs : windowEndMs;
  return {
    state,
    memory: { state, sinceMs, streaks, calmWindows: state === "adrift" ? calmWindows : 0, place },
    place,
    sentence: sentenceFor(state, strongest, comparison, calmWindows, rule),
  };
}

function nextState(
  before: DecisionMemory,
  beyond: readonly BeyondShare[],
  calmWindows: number,
  rule: DecisionRule,
): DecisionMemory["state"] {
  if (beyond.some(({ fires }) => fires)) return "adrift";
  if (before.state === "adrift" && calmWindows < rule.releaseAfter) return "adrift";
  return beyond.some(({ z }) => Math.abs(z) >= rule.zStrain) ? "straining" : "holding";
}

function thinDecision(
  before: DecisionMemory,
  streaks: readonly Streak[],
  comparison: NumericComparison,
): Decision {
  const memory = { ...before, streaks };
  if (before.state !== "adrift")
    return { state: "thin", memory, place: null, sentence: thinSentence(comparison) };
  return {
    state: "adrift",
    memory,
    place: before.place,
    sentence: `still adrift, for this window cannot tell; ${thinSentence(comparison)}`,
  };
}

function sentenceFor(
  state: DecisionMemory["state"],
  strongest: BeyondShare | undefined,
  comparison: NumericComparison,
  calmWindows: number,
  rule: DecisionRule,
): string {
  if (strongest === undefined) {
    if (state !== "adrift") return holdingSentence(comparison);
    return `still adrift: ${calmWindows} of ${rule.releaseAfter} windows back within tolerance; ${holdingSentence(comparison)}`;
  }
  const { windows } = strongest.streak;
  const length = windows === 1 ? "1 window" : `${windows} windows in a row`;
  return `${sentenceOf(strongest.share)}; beyond tolerance for ${length}`;
}
