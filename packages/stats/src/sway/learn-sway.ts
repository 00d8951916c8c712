import { type BlockCounts, hitsOf, smoothedShare, sumOf, totalsOf } from "./block-counts.js";
import { blockVariance } from "./block-variance.js";
import {
  type DesignEffects,
  designEffectAt,
  designEffects,
  FEWEST_POOLED,
  type MeasuredSpan,
  spansUpTo,
  upperLimit,
} from "./design-effects.js";
import { type HourProfile, hourOfBlock, hourProfile, profileShare } from "./hour-profile.js";
import { COUNTED } from "./watched-counts.js";

/** How far the baseline's own blocks wander from the baseline. */
export interface Sway {
  readonly basis: "time" | "rows";
  /** Blocks, those without events too. */
  readonly blocks: number;
  /** Length of a block; null where blocks follow the order of the rows. */
  readonly lengthMs: number | null;
  /** By watched share: events of a block, on average over the blocks that have any. */
  readonly meanTotals: readonly number[];
  /** By watched share, around the expected share of the whole baseline. */
  readonly effects: readonly DesignEffects[];
  /** Where the feature follows the hour of the day more than its blocks vary around that; else null. */
  readonly seasonal: Seasonal | null;
}

export interface Seasonal {
  readonly profile: HourProfile;
  /** By watched share, around the share expected at the hour: the worst hour's, up to an hour. */
  readonly effects: readonly DesignEffects[];
}

const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;
const HOURS = 24;

/**
 * Learns how much each watched share varies from block to block, at every scale that the blocks have at least seven stretches of.
 *
 * Shape   at least two blocks with events, else null.
 * Cost    O(blocks · shares · log blocks).
 * Source  docs/sway.md
 */
export function learnSway(blocks: BlockCounts): Sway | null {
  const used = Array.from(blocks.events).filter((n) => n > 0).length;
  if (used < 2) return null;
  const shares = Array.from({ length: COUNTED }, (_, share) => share);
  const totals = shares.map((share) => sumOf(totalsOf(blocks, share)));
  const expected = shares.map((share) => smoothedShare(sumOf(hitsOf(blocks, share)), totals[share]!));
  const effects = shares.map((share) => wholeEffects(blocks, share, expected[share]!));
  return {
    basis: blocks.lengthMs === null ? "rows" : "time",
    blocks: blocks.events.length,
    lengthMs: blocks.lengthMs,
    meanTotals: totals.map((total) => total / used),
    effects,
    seasonal: seasonalOf(blocks, effects),
  };
}

function wholeEffects(blocks: BlockCounts, share: number, expected: number): DesignEffects {
  const days = blocks.lengthMs === null ? 0 : (blocks.events.length * blocks.lengthMs) / DAY_MS;
  const spans = spansUpTo(blocks.events.length / FEWEST_POOLED);
  const measured: MeasuredSpan[] = [];
  for (const span of spans) {
    const [variance] = blockVariance({
      hits: hitsOf(blocks, share),
      totals: totalsOf(blocks, share),
      expected: () => expected,
      span,
    });
    const { ratio, runs } = variance!;
    // Around their own mean runs vary less than around the true share: by the part of the whole that one of them is.
    const count = blocks.events.length;
    const corrected = runs > 1 ? (ratio * count) / (count - span) : 0;
    measured.push({ span, ratio: corrected, degrees: degreesOf(corrected, runs, days, measured[0]) });
  }
  return designEffects(measured);
}

/** What varies between days has no more replicates than there are days. */
function degreesOf(ratio: number, runs: number, days: number, first: MeasuredSpan | undefined): number {
  const betweenDays = days >= 3 && first !== undefined && ratio > 1.5 * first.ratio;
  return betweenDays ? Math.min(runs - 1, Math.floor(days) - 1) : runs - 1;
}

/** The profile is taken where the feature, held against it, varies less from hour to hour than held against the whole. */
function seasonalOf(blocks: BlockCounts, whole: readonly DesignEffects[]): Seasonal | null {
  const profile = hourProfile(blocks);
  if (profile === null) return null;
  const hourSpan = Math.floor(HOUR_MS / blocks.lengthMs!);
  const effects = whole.map((_, share) => profileEffects(blocks, share, profile, hourSpan));
  const weight = (all: readonly DesignEffects[]) =>
    all.reduce((sum, one) => sum + Math.log(designEffectAt(one, hourSpan)), 0);
  return weight(effects) < weight(whole) ? { profile, effects } : null;
}

function profileEffects(
  blocks: BlockCounts,
  share: number,
  profile: HourProfile,
  hourSpan: number,
): DesignEffects {
  const lengthMs = blocks.lengthMs!;
  const startOf = (block: number) => blocks.startMs! + block * lengthMs;
  const expected = Float64Array.from({ length: blocks.events.length }, (_, block) =>
    profileShare(profile, share, startOf(block), startOf(block) + lengthMs),
  );
  const days = Math.floor(profile.days);
  const measured: MeasuredSpan[] = [];
  const firstByHour: MeasuredSpan[] = [];
  for (const span of spansUpTo(hourSpan)) {
    const byHour = blockVariance({
      hits: hitsOf(blocks, share),
      totals: totalsOf(blocks, share),
      expected: (block) => expected[block]!,
      span,
      groups: HOURS,
      groupOf: (block) => hourOfBlock(blocks, block),
    }).map(({ ratio, runs }, hour): MeasuredSpan => {
      const corrected = (ratio * days) / (days - 1);
      return { span, ratio: corrected, degrees: degreesOf(corrected, runs, days, firstByHour[hour]) };
    });
    if (firstByHour.length === 0) firstByHour.push(...byHour);
    measured.push(byHour.reduce((worst, one) => (upperLimit(one) > upperLimit(worst) ? one : worst)));
  }
  return designEffects(measured);
}
