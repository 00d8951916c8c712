import type { StreamConfig } from "@moorline/config";
import type { DecisionRule } from "@moorline/stats";
import type { EvaluationRow, FeatureStateRow, LogbookWrite, Store } from "@moorline/store";
import { windowAround } from "@moorline/windows";
import type { BaselineSides } from "./baseline-sides.js";
import { type DueWindow, dueWindows } from "./due-windows.js";
import { FreshRollups } from "./fresh-rollups.js";
import { compareWindow, judgeWindow, readWindow, storedComparison } from "./judge-window.js";
import { rollLong } from "./roll-long.js";
import { rollPane } from "./roll-pane.js";
import { type StateBook, stateChange } from "./state-book.js";

export interface RoundInput {
  readonly store: Store;
  readonly stream: StreamConfig;
  readonly rule: DecisionRule;
  readonly baselines: BaselineSides;
  readonly states: StateBook;
  /** Slices seen so far; those of the pane are added. */
  readonly slices: Set<string>;
  readonly nowMs: number;
  /** Gives other work its turn; called often. */
  readonly rest: () => Promise<void>;
}

/** Everything that follows from one pane, to be written in one transaction. */
export interface Round {
  readonly rollups: FreshRollups;
  readonly settledSegments: readonly number[];
  readonly evaluations: readonly EvaluationRow[];
  readonly states: readonly FeatureStateRow[];
  readonly logbook: readonly LogbookWrite[];
}

/** Closes a pane: rollups, then every window that ends with it, decided in order. */
export async function closePane(input: RoundInput, paneStartMs: number): Promise<Round> {
  const { store, stream } = input;
  const closedThroughMs = paneStartMs + stream.paneMs;
  const fresh = new FreshRollups(store);
  const rolled = await rollPane(store, stream.name, paneStartMs, false, input.rest);
  for (const row of rolled.rollups) fresh.add(row);
  for (const slice of rolled.slices) input.slices.add(slice);
  await rollLong(stream, [...input.slices], paneStartMs, closedThroughMs, fresh, input.rest);
  const evaluations: EvaluationRow[] = [];
  const states: FeatureStateRow[] = [];
  const logbook: LogbookWrite[] = [];
  for (const window of dueWindows(closedThroughMs, stream.horizons)) {
    for (const slice of input.slices) {
      for (const { name: feature } of stream.features) {
        const at = { window, slice, feature };
        const range = await readWindow(stream, at, closedThroughMs, fresh);
        const before = input.states.get({ horizon: window.horizon, slice, feature });
        const judged = judgeWindow(stream, at, range, input.baselines, before, input.rule, input.nowMs);
        if (judged.evaluation !== null) evaluations.push(judged.evaluation);
        const state = before?.state === "silent" ? stillSilent(before, judged.state) : judged.state;
        states.push(state);
        const entry = stateChange(before, state, input.nowMs, judged.figures);
        if (entry !== null) logbook.push(entry);
        await input.rest();
      }
    }
  }
  return { rollups: fresh, settledSegments: rolled.segmentIds, evaluations, states, logbook };
}

/** Windows of what came before a silence are decided and remembered, but end no silence: only events do. */
function stillSilent(before: FeatureStateRow, decided: FeatureStateRow): FeatureStateRow {
  return { ...decided, state: "silent", sinceMs: before.sinceMs, sentence: before.sentence };
}

/**
 * Takes late events into a pane that was closed: its rollup and the hours, days and evaluations that contain it are made again and marked as
 * amended. No state changes and nothing alerts: a page about the past helps nobody.
 */
export async function amendPane(
  input: RoundInput,
  paneStartMs: number,
  closedThroughMs: number,
): Promise<Round> {
  const { store, stream } = input;
  const fresh = new FreshRollups(store);
  const rolled = await rollPane(store, stream.name, paneStartMs, true, input.rest);
  for (const row of rolled.rollups) fresh.add(row);
  for (const slice of rolled.slices) input.slices.add(slice);
  await rollLong(stream, rolled.slices, paneStartMs, closedThroughMs, fresh, input.rest);
  const evaluations: EvaluationRow[] = [];
  for (const horizon of stream.horizons) {
    const { startMs, endMs } = windowAround(paneStartMs, horizon.ms);
    if (endMs > closedThroughMs) continue;
    const window = { horizon: horizon.label, startMs, endMs };
    evaluations.push(...(await amendWindow(input, window, closedThroughMs, fresh)));
  }
  const pane = new Date(paneStartMs).toISOString();
  return {
    rollups: fresh,
    settledSegments: rolled.segmentIds,
    evaluations,
    states: [],
    logbook: [
      {
        atMs: input.nowMs,
        stream: stream.name,
        kind: "pane-amended",
        subject: pane,
        sentence: `late events came for the pane of ${pane}: it now holds ${rolled.events} events, ${evaluations.length} evaluations were made again`,
        detail: { paneStartMs, events: rolled.events, evaluations: evaluations.length },
      },
    ],
  };
}

/** The evaluations of a window that was decided before, with their figures made again and their state as it was. */
async function amendWindow(
  input: RoundInput,
  window: DueWindow,
  closedThroughMs: number,
  fresh: FreshRollups,
): Promise<readonly EvaluationRow[]> {
  const { store, stream, baselines } = input;
  if (baselines.id === null) return [];
  const stored = await store.evaluations.evaluations({
    stream: stream.name,
    horizon: window.horizon,
    baselineId: baselines.id,
    fromMs: window.endMs - 1,
    toMs: window.endMs,
  });
  const amended: EvaluationRow[] = [];
  for (const row of stored) {
    const against = baselines.of(row.slice, row.feature);
    if (against === null) continue;
    const range = await readWindow(
      stream,
      { window, slice: row.slice, feature: row.feature },
      closedThroughMs,
      fresh,
    );
    if (!range.amended) continue;
    amended.push({
      ...row,
      events: range.sketch?.counts.events ?? 0,
      amended: true,
      comparison: storedComparison(compareWindow(range, against), against.slice),
      evaluatedAtMs: input.nowMs,
    });
    await input.rest();
  }
  return amended;
}
