import type { Streak } from "./decision-memory.js";
import type { DecisionRule } from "./decision-rule.js";
import { effectiveEvents } from "./effective-events.js";
import { signedRootDeviance } from "./signed-root-deviance.js";
import { type Standing, standingOf } from "./tolerance.js";
import { furthestFirst, type WatchedShare } from "./watched-share.js";

/** A share that is beyond tolerance in this window, with the streak that it is in. */
export interface BeyondShare {
  readonly share: WatchedShare;
  readonly standing: Standing;
  readonly streak: Streak;
  /** z of the whole streak's events taken together. */
  readonly z: number;
  /** Long and far enough, or far enough at once. */
  readonly fires: boolean;
}

const RECENT_Z = 8;

/** Judges every watched share and carries its streak on; shares beyond tolerance only, furthest first. */
export function beyondShares(
  previous: readonly Streak[],
  watched: readonly WatchedShare[],
  rule: DecisionRule,
  windowEndMs: number | null,
): readonly BeyondShare[] {
  const beyond: BeyondShare[] = [];
  for (const share of watched) {
    const standing = standingOf(share, rule);
    if (!standing.beyond) continue;
    const streak = extended(
      previous.find((s) => s.key === share.key),
      share,
      standing,
      windowEndMs,
    );
    const z = pooled(streak, share, rule);
    const sustained = streak.windows >= rule.persistence && Math.abs(z) >= rule.zPage;
    beyond.push({ share, standing, streak, z, fires: sustained || standing.atOnce });
  }
  return beyond.sort((a, b) => Number(b.fires) - Number(a.fires) || furthestFirst(a, b));
}

function extended(
  previous: Streak | undefined,
  share: WatchedShare,
  standing: Standing,
  windowEndMs: number | null,
): Streak {
  const direction = standing.z > 0 ? 1 : -1;
  const before = previous?.direction === direction ? previous : undefined;
  return {
    key: share.key,
    direction,
    windows: (before?.windows ?? 0) + 1,
    sinceMs: before === undefined ? windowEndMs : before.sinceMs,
    events: (before?.events ?? 0) + share.proven * share.productionEvents,
    total: (before?.total ?? 0) + share.productionEvents,
    recentZ: [...(before?.recentZ ?? []), standing.z].slice(-RECENT_Z),
  };
}

function pooled(streak: Streak, share: WatchedShare, rule: DecisionRule): number {
  const effective = effectiveEvents(share.baselineEvents, streak.total, rule.designEffect);
  return signedRootDeviance(Math.min(1, streak.events / streak.total), share.expected, effective);
}
