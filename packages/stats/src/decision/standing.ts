import { type DesignEffect, designEffectAt } from "../design-effect.js";
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

/** Missing values have no rank: the dependence of the middle stands for theirs. */
const MISSING_AS = 0.5;

/** Holds one watched share against its floor and computes its evidence. Source: docs/decision.md. */
export function standingOf(share: WatchedShare, rule: DecisionRule, designEffect?: DesignEffect): Standing {
  const effect = designEffectAt(designEffect, share.rank ?? MISSING_AS);
  const effective = effectiveEvents(share.baselineEvents, share.events, effect);
  const z = signedRootDeviance(share.proven, share.expected, effective);
  const { part, observed, expected, events } = share;
  return { z, floorPassed: passesFloor(part, observed, expected, events, rule) };
}
