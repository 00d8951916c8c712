import type { OnsetWindow } from "../../src/onset/find-onset.js";
import { autoregressive, countsOf, NORMAL_THRESHOLDS } from "./grounds.js";
import { Random } from "./random.js";

/** Changes whose beginning is looked for, as they act on one value. */
export const ONSET_CHANGES: Readonly<Record<string, (x: number, random: Random) => number>> = {
  "mean + .2 sd": (x) => x + 0.2,
  "mean + .1 sd": (x) => x + 0.1,
  "scale x 1.3": (x) => 1.3 * x,
  "twice the values beyond p99": (x, random) =>
    x <= 2.326 && random.uniform() < 0.01 / 0.99 ? 2.326 - Math.log(random.uniform()) * 0.37 : x,
  "1 % of rows at + 10 sd": (x, random) => (random.uniform() < 0.01 ? x + 10 : x),
};

export const ONSET_WINDOWS = 240;
const VALUES = 1_000;

export interface OnsetCase {
  readonly windows: readonly OnsetWindow[];
  /** Index of the first changed window. */
  readonly truth: number;
}

/** 240 windows of 1,000 normal values, independent or AR(.8); the change begins between a quarter and nine tenths of the way. */
export function onsetCase(change: string, phi: number, seed: number): OnsetCase {
  const random = new Random(seed);
  const next = phi === 0 ? () => random.normal() : autoregressive(phi, random);
  const truth = Math.floor(ONSET_WINDOWS * (0.25 + 0.65 * random.uniform()));
  const apply = ONSET_CHANGES[change]!;
  const windows = Array.from({ length: ONSET_WINDOWS }, (_, w): OnsetWindow => {
    const values = Array.from({ length: VALUES }, () => (w >= truth ? apply(next(), random) : next()));
    const { atOrBelow } = countsOf(values, NORMAL_THRESHOLDS);
    return { startMs: w, endMs: w + 1, n: VALUES, atOrBelow };
  });
  return { windows, truth };
}

/** Shares of a standard normal at or below the kit's thresholds (by numeric integration of its density; Abramowitz & Stegun table 26.1 to 4 digits). */
export const NORMAL_SHARES: readonly number[] = [
  0.0010008, 0.0100093, 0.0499849, 0.0999214, 0.2501556, 0.5, 0.7498444, 0.9000786, 0.9500151, 0.9899907,
  0.9989992,
];
