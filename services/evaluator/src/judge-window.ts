import { sideOfSketch } from "@moorline/baseline";
import type { StreamConfig } from "@moorline/config";
import { NumericSketch } from "@moorline/sketch";
import {
  compareNumeric,
  type DecisionMemory,
  type DecisionRule,
  decide,
  decisionSentence,
  type NumericComparison,
  whyOf,
  windowCounts,
} from "@moorline/stats";
import type { EvaluationRow, FeatureStateRow } from "@moorline/store";
import { type RangeSketch, readRange } from "@moorline/windows";
import type { BaselineSides, HeldAgainst } from "./baseline-sides.js";
import type { DueWindow } from "./due-windows.js";
import type { FreshRollups, SeriesQuery } from "./fresh-rollups.js";
import { patternOf } from "./window-pattern.js";

export interface SeriesWindow {
  readonly window: DueWindow;
  readonly slice: string;
  readonly feature: string;
}

export interface Judgement {
  readonly evaluation: EvaluationRow | null;
  readonly state: FeatureStateRow;
  /** Tolerances and figures for the logbook. */
  readonly figures: Readonly<Record<string, unknown>>;
}

/** The window of one feature and slice, read from rollups. */
export function readWindow(
  stream: StreamConfig,
  at: SeriesWindow,
  closedThroughMs: number,
  fresh: FreshRollups,
): Promise<RangeSketch> {
  return readRange((query) => fresh.read(query as SeriesQuery), {
    stream: stream.name,
    feature: at.feature,
    slice: at.slice,
    fromMs: at.window.startMs,
    toMs: at.window.endMs,
    paneMs: stream.paneMs,
    closedThroughMs,
  });
}

/** Compares a window with the baseline, without deciding. */
export function compareWindow(range: RangeSketch, against: HeldAgainst): NumericComparison {
  return compareNumeric(against.held.side, sideOfSketch(range.sketch ?? new NumericSketch()), {
    pairs: false,
  });
}

/** Compares and decides: the evaluation, the state that follows from it and from the state before. */
export function judgeWindow(
  stream: StreamConfig,
  at: SeriesWindow,
  range: RangeSketch,
  baselines: BaselineSides,
  before: FeatureStateRow | undefined,
  rule: DecisionRule,
  nowMs: number,
): Judgement {
  const against = baselines.of(at.slice, at.feature);
  const place = { stream: stream.name, horizon: at.window.horizon, slice: at.slice, feature: at.feature };
  if (baselines.id === null || against === null) {
    const sentence =
      baselines.id === null ? "no baseline is active" : "the active baseline has nothing of this feature";
    const state = stateRow(place, at, "thin", before, baselines.id, null, sentence);
    return { evaluation: null, state, figures: {} };
  }
  const production = sideOfSketch(range.sketch ?? new NumericSketch());
  const comparison = compareNumeric(against.held.side, production, { pairs: false });
  const ground = against.held.ground(at.window.endMs - at.window.startMs, rule);
  const counts = windowCounts(comparison);
  const decision = decide(memoryOf(before, baselines.id), { counts, endMs: at.window.endMs }, ground);
  const unit = stream.features.find(({ name }) => name === at.feature)?.unit ?? null;
  const pattern = patternOf(decision, production, against.held, ground, unit);
  const decided = decisionSentence(decision, counts, ground);
  const sentence = pattern === null ? decided : `${decided}. The window reads: ${pattern.sentence}`;
  const state = stateRow(place, at, decision.state, before, baselines.id, decision.memory, sentence);
  return {
    evaluation: {
      ...place,
      windowStartMs: at.window.startMs,
      windowEndMs: at.window.endMs,
      baselineId: baselines.id,
      state: decision.state,
      events: range.sketch?.counts.events ?? 0,
      amended: range.amended,
      comparison: storedComparison(comparison, against.slice),
      evaluatedAtMs: nowMs,
    },
    state,
    figures: {
      place: decision.memory.place,
      why: whyOf(decision, ground),
      pattern,
      rule,
      n: comparison.n,
      exactCounts: comparison.exactCounts,
    },
  };
}

/** Null for a feature that was never judged against this baseline, or by a version that kept something else. */
function memoryOf(before: FeatureStateRow | undefined, baselineId: string): DecisionMemory | null {
  if (before?.baselineId !== baselineId) return null;
  const memory = before.memory as Partial<DecisionMemory> | null;
  return memory?.history === undefined ? null : (memory as DecisionMemory);
}

/** What is kept of a comparison: everything but its pairs, which are made again from rollups when somebody asks. */
export function storedComparison(comparison: NumericComparison, baselineSlice: string): unknown {
  const { pairs: _, ...kept } = comparison;
  return { ...kept, baselineSlice };
}

function stateRow(
  place: Pick<FeatureStateRow, "stream" | "horizon" | "slice" | "feature">,
  at: SeriesWindow,
  state: FeatureStateRow["state"],
  before: FeatureStateRow | undefined,
  baselineId: string | null,
  memory: unknown,
  sentence: string,
): FeatureStateRow {
  const sinceMs = before?.state === state ? before.sinceMs : at.window.endMs;
  return { ...place, state, sinceMs, windowEndMs: at.window.endMs, baselineId, memory, sentence };
}
