import { type BlockCounts, hitsOf, smoothedShare, sumOf, totalsOf } from "./block-counts.js";
import { COUNTED } from "./watched-counts.js";

const HOUR_MS = 3_600_000;
const HOURS = 24;
/** Fewest days that tell a daily cycle from chance. */
export const PROFILE_DAYS = 7;

/** Expected shares by the hour of the day (UTC), learnt from the baseline. */
export interface HourProfile {
  /** By watched share, then hour. */
  readonly shares: readonly (readonly number[])[];
  /** By watched share, then hour: baseline events in it. */
  readonly totals: readonly (readonly number[])[];
  readonly days: number;
}

/** Null where the blocks cannot tell: no times, blocks longer than an hour, fewer than seven days, or an hour without events. */
export function hourProfile(blocks: BlockCounts): HourProfile | null {
  const { lengthMs, startMs, finite } = blocks;
  if (lengthMs === null || startMs === null || lengthMs > HOUR_MS) return null;
  const days = (finite.length * lengthMs) / (HOURS * HOUR_MS);
  if (days < PROFILE_DAYS) return null;
  const shares: number[][] = [];
  const totals: number[][] = [];
  for (let share = 0; share < COUNTED; share += 1) {
    const hit = new Array<number>(HOURS).fill(0);
    const total = new Array<number>(HOURS).fill(0);
    const [hits, all] = [hitsOf(blocks, share), totalsOf(blocks, share)];
    for (let block = 0; block < all.length; block += 1) {
      const hour = hourOfBlock(blocks, block);
      hit[hour]! += hits[block]!;
      total[hour]! += all[block]!;
    }
    if (sumOf(all) > 0 && total.some((n) => n === 0)) return null;
    shares.push(hit.map((count, hour) => smoothedShare(count, total[hour]!)));
    totals.push(total);
  }
  return { shares, totals, days };
}

/** Hour of the day of a block's middle. */
export function hourOfBlock({ startMs, lengthMs }: BlockCounts, block: number): number {
  return Math.floor(hoursOfDay(startMs! + (block + 0.5) * lengthMs!)) % HOURS;
}

/**
 * Expected share in a window: between the centres of hours by linear interpolation at its middle; longer than an hour, the mean of the hours that it
 * covers, each with the weight of its events in the baseline.
 */
export function profileShare(profile: HourProfile, share: number, startMs: number, endMs: number): number {
  const hours = profile.shares[share]!;
  if (endMs - startMs <= HOUR_MS) return interpolated(hours, hoursOfDay((startMs + endMs) / 2));
  const weights = profile.totals[share]!;
  let sum = 0;
  let weight = 0;
  for (let at = startMs; at < endMs; at += HOUR_MS) {
    const hour = Math.floor(hoursOfDay(at));
    sum += weights[hour]! * hours[hour]!;
    weight += weights[hour]!;
  }
  return sum / weight;
}

function interpolated(hours: readonly number[], at: number): number {
  const before = Math.floor(at - 0.5 + HOURS) % HOURS;
  const part = at - 0.5 - Math.floor(at - 0.5);
  return hours[before]! + part * (hours[(before + 1) % HOURS]! - hours[before]!);
}

function hoursOfDay(ms: number): number {
  return (((ms / HOUR_MS) % HOURS) + HOURS) % HOURS;
}
