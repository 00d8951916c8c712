import { effectiveEvents } from "../effective-events.js";
import { signedRootDeviance } from "../signed-root-deviance.js";
import type { DecisionRule } from "./decision-rule.js";
import { passesFloor } from "./floors.js";
import type { WatchedShare } from "./watched-share.js";

/** How a watched share stands in one comparison that has no time axis. */
export interface Standing {
  /** Signed-root deviance; positive: more values at or below the threshold than expected (or more missing). */
  readonly z: number;
  /** Is the difference large enough to matter? */
  readonly floorPassed: boolean;
}

/** Holds one watched share against its floor and computes its evidence. Source: docs/decision.md. */
export function standingOf(share: WatchedShare, rule: DecisionRule, designEffect = 1): Standing {
  const effective = effectiveEvents(share.baselineEvents, share.events, designEffect);
  const z = signedRootDeviance(share.proven, share.expected, effective);
  const { part, observed, expected, events } = share;
  return { z, floorPassed: passesFloor(part, observed, expected, events, rule) };
}
