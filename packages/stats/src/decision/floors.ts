import type { DecisionRule } from "./decision-rule.js";

export type WatchedPart = "lower tail" | "body" | "upper tail" | "missing";

/** A share as it is, as it was expected, and how many events it is of. */
export interface SharePair {
  readonly part: WatchedPart;
  readonly observed: number;
  readonly expected: number;
  readonly events: number;
}

/**
 * Is the difference large enough to matter, whatever n?
 *
 * Definition  body: |g − e| ≥ bodyFloor. Tails, with t the share beyond the threshold: t ≥ tailFactor·t_e with at least tailMinEvents events, or
 *             t ≤ tailLighterFactor·t_e with at least tailMinExpected expected. Missing: |g − e| ≥ max(missingFloor, missingFactor·e).
 * Source      docs/decision.md
 */
export function passesFloor(
  part: WatchedPart,
  observed: number,
  expected: number,
  events: number,
  rule: DecisionRule,
): boolean {
  const difference = Math.abs(observed - expected);
  if (part === "body") return difference >= rule.bodyFloor;
  if (part === "missing") return difference >= Math.max(rule.missingFloor, rule.missingFactor * expected);
  const now = beyondShare(part, observed);
  const before = beyondShare(part, expected);
  if (now >= rule.tailFactor * before) return now * events >= rule.tailMinEvents;
  return now <= rule.tailLighterFactor * before && before * events >= rule.tailMinExpected;
}

/** So large that one window is enough. */
export function isFarAtOnce({ part, observed, expected, events }: SharePair, rule: DecisionRule): boolean {
  if (Math.abs(observed - expected) >= rule.bodyAtOnce) return true;
  if (part === "body" || part === "missing") return false;
  const now = beyondShare(part, observed);
  return now >= rule.tailFactorAtOnce * beyondShare(part, expected) && now * events >= rule.tailEventsAtOnce;
}

/** The share that is spoken of: beyond the threshold for an upper tail, else at or below it. */
export function beyondShare(part: WatchedPart, share: number): number {
  return part === "upper tail" ? 1 - share : share;
}
