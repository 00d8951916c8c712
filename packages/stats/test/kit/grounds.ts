import type { DecisionGround, JudgedWindow } from "../../src/decision/decide.js";
import { criticalZ, DEFAULT_DECISION_RULE, type DecisionRule } from "../../src/decision/decision-rule.js";
import { NO_REPLAY, replayBaseline } from "../../src/decision/replay.js";
import { sideCounts } from "../../src/decision/side-counts.js";
import { windowCounts } from "../../src/decision/window-counts.js";
import { FROZEN_RANKS } from "../../src/grid-ranks.js";
import type { NumericComparison } from "../../src/numeric-comparison.js";
import type { BlockCounts } from "../../src/sway/block-counts.js";
import { learnSway } from "../../src/sway/learn-sway.js";
import { Tolerance } from "../../src/sway/tolerance.js";
import type { WatchedCounts } from "../../src/sway/watched-counts.js";
import { Random } from "./random.js";
import { BASELINE } from "./windows.js";

export const MINUTE_MS = 60_000;
export const RULE: DecisionRule = { ...DEFAULT_DECISION_RULE, zPage: criticalZ(2.16e7) };

/** The kit's baseline without blocks: events taken as independent. */
export function assumedGround(rule: DecisionRule = RULE): DecisionGround {
  const baseline = sideCounts(BASELINE);
  const tolerance = new Tolerance({ baseline, sway: null, windowMs: MINUTE_MS });
  return { tolerance, rule, replay: () => NO_REPLAY, thresholds: baseline.thresholds };
}

export function judged(comparison: NumericComparison, endMs: number | null): JudgedWindow {
  return { counts: windowCounts(comparison), endMs };
}

/** Blocks of a minute with `each` values each, drawn block by block and counted at the thresholds. */
export function blocksOf(
  count: number,
  each: number,
  thresholds: readonly number[],
  draw: (block: number, index: number) => number | null,
  startMs = 0,
): BlockCounts {
  const windows = Array.from({ length: count }, (_, block) =>
    countsOf(
      Array.from({ length: each }, (__, index) => draw(block, index)),
      thresholds,
    ),
  );
  return {
    lengthMs: MINUTE_MS,
    startMs,
    events: windows.map(({ events }) => events),
    missing: windows.map(({ missing }) => missing),
    finite: windows.map(({ finite }) => finite),
    atOrBelow: thresholds.map((_, share) => windows.map(({ atOrBelow }) => atOrBelow[share]!)),
  };
}

export function countsOf(values: readonly (number | null)[], thresholds: readonly number[]): WatchedCounts {
  const finite = values.filter((value) => value !== null);
  return {
    events: values.length,
    missing: values.length - finite.length,
    finite: finite.length,
    atOrBelow: thresholds.map((threshold) => finite.filter((value) => value <= threshold).length),
    belowLowest: null,
  };
}

/** What windows are decided on when a baseline has these blocks. */
export function groundOf(
  blocks: BlockCounts,
  thresholds: readonly number[],
  rule: DecisionRule = RULE,
  windowMs = MINUTE_MS,
): DecisionGround {
  const tolerance = new Tolerance({ baseline: wholeOf(blocks), sway: learnSway(blocks), windowMs });
  return { tolerance, rule, replay: () => replayBaseline(blocks, tolerance, rule), thresholds };
}

/** The same baseline with its events taken as independent. */
export function independentGround(blocks: BlockCounts, thresholds: readonly number[]): DecisionGround {
  const tolerance = new Tolerance({ baseline: wholeOf(blocks), sway: null, windowMs: MINUTE_MS });
  return { tolerance, rule: RULE, replay: () => NO_REPLAY, thresholds };
}

export function wholeOf(blocks: BlockCounts): WatchedCounts {
  const sum = (values: ArrayLike<number>) => Array.from(values).reduce((a, b) => a + b, 0);
  return {
    events: sum(blocks.events),
    missing: sum(blocks.missing),
    finite: sum(blocks.finite),
    atOrBelow: blocks.atOrBelow.map(sum),
    belowLowest: null,
  };
}

/** Quantiles of the standard normal at the frozen ranks, to three digits (Abramowitz & Stegun 26.2, table). */
export const NORMAL_THRESHOLDS: readonly number[] = [
  -3.09, -2.326, -1.645, -1.282, -0.674, 0, 0.674, 1.282, 1.645, 2.326, 3.09,
];

/** Gaussian AR(1) by index: each call gives the next value. */
export function autoregressive(phi: number, random: Random): () => number {
  let last = random.normal();
  return () => {
    last = phi * last + Math.sqrt(1 - phi * phi) * random.normal();
    return last;
  };
}

export { FROZEN_RANKS, Random };
