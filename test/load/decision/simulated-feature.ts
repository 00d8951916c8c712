import { blockLengthMs } from "@moorline/baseline";
import {
  type BlockCounts,
  type DecisionGround,
  type DecisionRule,
  FROZEN_RANKS,
  learnSway,
  type Replay,
  replayBaseline,
  type Sway,
  Tolerance,
  type WatchedCounts,
} from "@moorline/stats";
import { CountsAtThresholds } from "./counts-at-thresholds.js";
import { MINUTE_MS, VALUES_A_WINDOW } from "./setting.js";
import type { StreamModel, WindowSource } from "./stream-model.js";

/** A Monday, midnight. */
const START_MS = Date.UTC(2026, 0, 5);

/** One feature with its baseline, through the same code that judges it in production. */
export class SimulatedFeature {
  readonly ground: DecisionGround;
  readonly sway: Sway | null;
  readonly source: WindowSource;
  readonly #counter: CountsAtThresholds;
  readonly #column = new Float64Array(VALUES_A_WINDOW);
  endMs: number;

  constructor(model: StreamModel, seed: number, rule: DecisionRule, thresholds: readonly number[]) {
    this.source = model.start(seed);
    this.#counter = new CountsAtThresholds(thresholds);
    const minutes = model.baselineMinutes;
    const lengthMs = blockLengthMs(START_MS, START_MS + minutes * MINUTE_MS - 1, MINUTE_MS);
    const blocks = this.#readBlocks(minutes, lengthMs / MINUTE_MS);
    this.endMs = START_MS + minutes * MINUTE_MS;
    this.sway = learnSway(blocks);
    const baseline = wholeOf(blocks);
    const tolerance = new Tolerance({ baseline, sway: this.sway, windowMs: MINUTE_MS });
    let replay: Replay | null = null;
    this.ground = {
      tolerance,
      rule,
      thresholds,
      replay: () => {
        replay ??= replayBaseline(blocks, tolerance, rule);
        return replay;
      },
    };
  }

  /** The next window, its values changed one by one. */
  next(change: ((column: Float64Array) => void) | null = null): {
    readonly counts: WatchedCounts;
    readonly endMs: number;
  } {
    this.source.next(this.#column);
    change?.(this.#column);
    this.endMs += MINUTE_MS;
    return { counts: this.#counter.count(this.#column), endMs: this.endMs };
  }

  #readBlocks(minutes: number, minutesEach: number): BlockCounts {
    const count = Math.ceil(minutes / minutesEach);
    const finite = new Uint32Array(count);
    const atOrBelow = FROZEN_RANKS.map(() => new Uint32Array(count));
    for (let minute = 0; minute < minutes; minute += 1) {
      this.source.next(this.#column);
      const block = Math.floor(minute / minutesEach);
      const { finite: n, atOrBelow: hits } = this.#counter.count(this.#column);
      finite[block]! += n;
      for (const [share, hit] of hits.entries()) atOrBelow[share]![block]! += hit;
    }
    const lengthMs = minutesEach * MINUTE_MS;
    return {
      lengthMs,
      startMs: START_MS,
      events: finite,
      missing: new Uint32Array(count),
      finite,
      atOrBelow,
    };
  }
}

function wholeOf(blocks: BlockCounts): WatchedCounts {
  const sum = (values: ArrayLike<number>) => Array.from(values).reduce((a, b) => a + b, 0);
  const finite = sum(blocks.finite);
  return { events: finite, missing: 0, finite, atOrBelow: blocks.atOrBelow.map(sum), belowLowest: null };
}

/** Thresholds of a model: its quantiles, the same for all of its features. */
export function thresholdsOf(model: StreamModel, seed: number): readonly number[] {
  return FROZEN_RANKS.map(quantilesOf(model, seed));
}

const sortedValues = new Map<string, Float64Array>();

/** Quantiles of a model's values, from every minute of one long stretch of it. */
export function quantilesOf(model: StreamModel, seed: number): (rank: number) => number {
  const key = `${model.name} ${seed}`;
  const sorted = sortedValues.get(key) ?? sortedStretch(model, seed);
  sortedValues.set(key, sorted);
  return (rank) => sorted[Math.ceil(rank * sorted.length) - 1]!;
}

function sortedStretch(model: StreamModel, seed: number): Float64Array {
  const source = model.start(seed);
  const column = new Float64Array(VALUES_A_WINDOW);
  const values: number[] = [];
  for (let minute = 0; minute < model.baselineMinutes; minute += 1) {
    source.next(column);
    for (let i = minute % TAKEN_EACH; i < column.length; i += TAKEN_EACH) values.push(column[i]!);
  }
  return Float64Array.from(values).sort();
}

const TAKEN_EACH = 7;
