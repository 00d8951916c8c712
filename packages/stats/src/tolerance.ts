import type { DecisionRule } from "./decision-rule.js";
import { effectiveEvents } from "./effective-events.js";
import { signedRootDeviance } from "./signed-root-deviance.js";
import type { WatchedShare } from "./watched-share.js";

/** How a watched share stands in one window. */
export interface Standing {
  /** Signed-root deviance; positive: more values at or below the threshold than expected (or more missing). */
  readonly z: number;
  /** Is the difference large enough to matter? */
  readonly floorPassed: boolean;
  /** Large enough to matter and not for want of data. */
  readonly beyond: boolean;
  /** So far out that this one window is enough. */
  readonly atOnce: boolean;
}

/**
 * Holds one watched share against the tolerance.
 *
 * Definition  body: |g − e| ≥ bodyFloor. Tails, with t the share beyond the threshold: t ≥ tailFactor·t_e with at least
 *             tailMinEvents events, or t ≤ tailLighterFactor·t_e with at least tailMinExpected expected.
 *             Missing: |g − e| ≥ max(missingFloor, missingFactor·e). Beyond: that, and |z| ≥ zWindow.
 * Source      docs/decision.md
 */
export function standingOf(share: WatchedShare, rule: DecisionRule): Standing {
  const effective = effectiveEvents(share.baselineEvents, share.productionEvents, rule.designEffect);
  const z = signedRootDeviance(share.proven, share.expected, effective);
  const floorPassed = passesFloor(share, rule);
  return {
    z,
    floorPassed,
    beyond: floorPassed && Math.abs(z) >= rule.zWindow,
    atOnce: floorPassed && Math.abs(z) >= rule.zAtOnce && farAtOnce(share, rule),
  };
}

function passesFloor(share: WatchedShare, rule: DecisionRule): boolean {
  const difference = Math.abs(share.observed - share.expected);
  if (share.part === "body") return difference >= rule.bodyFloor;
  if (share.part === "missing") {
    return difference >= Math.max(rule.missingFloor, rule.missingFactor * share.expected);
  }
  const { now, before } = tailShares(share);
  const heavier = now >= rule.tailFactor * before && now * share.productionEvents >= rule.tailMinEvents;
  const lighter =
    now <= rule.tailLighterFactor * before && before * share.productionEvents >= rule.tailMinExpected;
  return heavier || lighter;
}

function farAtOnce(share: WatchedShare, rule: DecisionRule): boolean {
  if (Math.abs(share.observed - share.expected) >= rule.bodyAtOnce) return true;
  if (share.part === "body" || share.part === "missing") return false;
  const { now, before } = tailShares(share);
  return now >= rule.tailFactorAtOnce * before && now * share.productionEvents >= rule.tailEventsAtOnce;
}

/** The share beyond the threshold, on the side that the tail lies. */
export function tailShares(share: WatchedShare): { readonly now: number; readonly before: number } {
  if (share.part === "upper tail") return { now: 1 - share.observed, before: 1 - share.expected };
  return { now: share.observed, before: share.expected };
}
