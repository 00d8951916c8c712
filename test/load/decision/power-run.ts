import {
  type BlockCounts,
  type DecisionGround,
  type DecisionMemory,
  decide,
  FROZEN_RANKS,
  learnSway,
  type NumericSide,
  numericSideOf,
  replayBaseline,
  sideCounts,
  Tolerance,
} from "@moorline/stats";
import type { Change } from "./changes.js";
import { CountsAtThresholds } from "./counts-at-thresholds.js";
import { FastRandom } from "./fast-random.js";
import { MINUTE_MS, RULE_OF_A_TEAM } from "./setting.js";

export interface PowerSetting {
  readonly side: NumericSide;
  readonly ground: DecisionGround;
  readonly quantile: (rank: number) => number;
}

/** A normal baseline of so many one-minute blocks, judged by windows of a minute. */
export function normalSetting(blocks: number, eventsPerWindow: number, seed: number): PowerSetting {
  const random = new FastRandom(seed);
  const values = new Float64Array(blocks * eventsPerWindow);
  random.fillNormal(values);
  const side = numericSideOf(values);
  const baseline = sideCounts(side);
  const counter = new CountsAtThresholds(baseline.thresholds);
  const windows = Array.from({ length: blocks }, (_, block) =>
    counter.count(values.subarray(block * eventsPerWindow, (block + 1) * eventsPerWindow)),
  );
  const counts: BlockCounts = {
    lengthMs: MINUTE_MS,
    startMs: 0,
    events: windows.map(({ events }) => events),
    missing: windows.map(() => 0),
    finite: windows.map(({ finite }) => finite),
    atOrBelow: FROZEN_RANKS.map((_, share) => windows.map(({ atOrBelow }) => atOrBelow[share]!)),
  };
  const tolerance = new Tolerance({ baseline, sway: learnSway(counts), windowMs: MINUTE_MS });
  const replay = replayBaseline(counts, tolerance, RULE_OF_A_TEAM);
  const sorted = values.slice().sort();
  return {
    side,
    ground: { tolerance, rule: RULE_OF_A_TEAM, replay: () => replay, thresholds: baseline.thresholds },
    quantile: (rank) => sorted[Math.ceil(rank * sorted.length) - 1]!,
  };
}

/** Does a change page within so many windows that lie wholly in it? */
export function pagesWithin(
  { ground }: PowerSetting,
  change: Change,
  windows: number,
  eventsPerWindow: number,
  seed: number,
): boolean {
  const random = new FastRandom(seed);
  const counter = new CountsAtThresholds(ground.thresholds);
  const column = new Float64Array(eventsPerWindow);
  let memory: DecisionMemory | null = null;
  for (let window = 1; window <= windows; window += 1) {
    random.fillNormal(column);
    change(column);
    const decision = decide(memory, { counts: counter.count(column), endMs: window * MINUTE_MS }, ground);
    if (decision.state === "adrift") return true;
    memory = decision.memory;
  }
  return false;
}
