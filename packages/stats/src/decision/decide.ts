import type { Tolerance } from "../sway/tolerance.js";
import { BELOW_LOWEST, type WatchedCounts } from "../sway/watched-counts.js";
import { type DecisionMemory, EMPTY_MEMORY } from "./decision-memory.js";
import type { DecisionRule } from "./decision-rule.js";
import { placeOf } from "./drift-place.js";
import {
  type Evidence,
  isAtOnce,
  pairOf,
  SHARE_RANKS,
  singleEvidence,
  sustainedEvidence,
} from "./evidence.js";
import type { Replay } from "./replay.js";
import { furthestFirst } from "./watched-share.js";
import { blockSums, LONGEST_SCALE, rowWidth, type WindowHistory, withWindow } from "./window-history.js";

/** What a feature is held against at one horizon. */
export interface DecisionGround {
  readonly tolerance: Tolerance;
  readonly rule: DecisionRule;
  /** What the rule finds in the baseline itself; asked for only where something would page or strain. */
  readonly replay: () => Replay;
  /** The baseline's thresholds by frozen rank, for the place; empty where they are not known. */
  readonly thresholds: readonly number[];
}

export interface JudgedWindow {
  readonly counts: WatchedCounts;
  /** Windows in order, not overlapping, each once; null where time plays no part. */
  readonly endMs: number | null;
}

export interface Decision {
  readonly state: "holding" | "straining" | "adrift" | "thin";
  /** To be passed with the next window. */
  readonly memory: DecisionMemory;
  /** What speaks most for straining or adrift in this window; null without any. */
  readonly evidence: Evidence | null;
}

/**
 * The state of a feature after one more window.
 *
 * Definition  At every scale of s = 1, 2, 4 … 64 windows the last `persistence` blocks of s windows are looked at, and their pool. `adrift` when at one
 *             watched share the pool passes the effect floor and |z| ≥ zPage, each block by itself points the same way with |z| ≥ zBlock, and |z| is
 *             `guardFactor` times what the same rule finds in the baseline itself; or when one window is far enough at once. `straining` when only
 *             zPage − zStrainBelow is reached, or one window alone reaches that. `adrift` ends after `releaseAfter` windows in which neither pools nor the window
 *             itself reach zRelease.
 *             A `thin` window neither advances nor clears anything, and does not end `adrift`.
 * Shape       memory: null at first and after a change of the baseline.
 * Edges       pure: the same arguments give the same decision, and memory goes through JSON unchanged. A window in which every value is missing
 *             is judged by its missing fraction.
 * Source      docs/decision.md
 */
export function decide(
  memory: DecisionMemory | null,
  window: JudgedWindow,
  ground: DecisionGround,
): Decision {
  const before = memory ?? EMPTY_MEMORY;
  const { tolerance, rule } = ground;
  const history = withWindow(before.history, window.counts, window.endMs, tolerance, rule.persistence);
  const least = before.state === "adrift" ? rule.zRelease : rule.zPage - rule.zStrainBelow;
  const single = strongest(proven(singles(history, least, ground), ground, "single"));
  const standing = standingEvidence(before.standing, history, least, ground);
  const atOnce = single !== null && isAtOnce(single, rule) ? single : null;
  const paging = atOnce ?? strongest(standing.filter(({ z }) => Math.abs(z) >= rule.zPage));
  const evidence = paging ?? strongest(single === null ? standing : [...standing, single]);
  if (evidence === null && isThin(window.counts, ground))
    return { state: before.state === "adrift" ? "adrift" : "thin", memory: { ...before, history }, evidence };
  const calmWindows = before.state === "adrift" && evidence === null ? before.calmWindows + 1 : 0;
  const state = nextState(before, paging, evidence, calmWindows, rule);
  const sinceMs = state === before.state && memory !== null ? before.sinceMs : window.endMs;
  const place =
    evidence !== null && state !== "holding"
      ? placeOf(thresholdOf(evidence, ground), evidence.z)
      : state === "adrift"
        ? before.place
        : null;
  const calm = state === "adrift" ? calmWindows : 0;
  return { state, memory: { state, sinceMs, history, standing, calmWindows: calm, place }, evidence };
}

function nextState(
  before: DecisionMemory,
  paging: Evidence | null,
  evidence: Evidence | null,
  calmWindows: number,
  rule: DecisionRule,
): DecisionMemory["state"] {
  if (paging !== null) return "adrift";
  if (before.state === "adrift" && calmWindows < rule.releaseAfter) return "adrift";
  return evidence === null ? "holding" : "straining";
}

/** The share of some evidence with the threshold that it is of. */
export function thresholdOf(evidence: Evidence, { thresholds }: Pick<DecisionGround, "thresholds">) {
  const rank = SHARE_RANKS[evidence.share]!;
  const strictly = evidence.share === BELOW_LOWEST;
  const value = rank === null ? null : (thresholds[strictly ? 0 : evidence.share] ?? null);
  return { ...pairOf(evidence), rank, value, strictly };
}

/** The strongest of each scale: new where the scale is due, else as it was. */
function standingEvidence(
  before: readonly Evidence[],
  history: WindowHistory,
  least: number,
  ground: DecisionGround,
): readonly Evidence[] {
  const { tolerance, rule } = ground;
  const standing: Evidence[] = [];
  for (let scale = 1; scale <= LONGEST_SCALE; scale *= 2) {
    const sums = blockSums(history, scale, rule.persistence, rowWidth(tolerance));
    if (sums === null) {
      // Not due now; with a history that was begun anew there is nothing to look back on.
      const kept = before.find((one) => one.scale === scale);
      if (kept !== undefined && history.windows > scale * rule.persistence) standing.push(kept);
      continue;
    }
    const found = sustainedEvidence({ sums, scale, tolerance, rule, least, floored: true });
    const one = strongest(proven(found, ground, "sustained"));
    if (one !== null) standing.push(one);
  }
  return standing;
}

function singles(history: WindowHistory, least: number, { tolerance, rule }: DecisionGround): Evidence[] {
  const sums = blockSums(history, 1, 1, rowWidth(tolerance))!;
  return singleEvidence({ sums, scale: 1, tolerance, rule, least, floored: true });
}

/** What goes clearly beyond what the baseline itself does. */
function proven(found: readonly Evidence[], ground: DecisionGround, kind: keyof Replay): readonly Evidence[] {
  if (found.length === 0) return found;
  const itself = ground.replay()[kind];
  return found.filter(({ share, z }) => Math.abs(z) >= ground.rule.guardFactor * itself[share]!);
}

function strongest(found: readonly Evidence[]): Evidence | null {
  if (found.length === 0) return null;
  const placed = found.map((one) => ({
    one,
    z: one.z,
    share: { ...pairOf(one), rank: SHARE_RANKS[one.share]! },
  }));
  return placed.reduce((best, next) => (furthestFirst(next, best) < 0 ? next : best)).one;
}

/** Too few values in this window to call it holding. */
function isThin(counts: WatchedCounts, { tolerance, rule }: DecisionGround): boolean {
  return tolerance.independentValues(counts.finite) < rule.minEvents;
}
