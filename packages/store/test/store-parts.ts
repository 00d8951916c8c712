import { NumericSketch } from "@moorline/sketch";
import {
  type Checkpoint,
  decodeSegmentBody,
  type EvaluationCommit,
  type EvaluationRow,
  encodeSegmentBody,
  type FeatureStateRow,
  type Lease,
  type RollupRow,
  type SegmentWrite,
  type Store,
} from "../src/index.js";

export const PANE_MS = 60_000;

/** A numeric sketch of the values 1 … count, with some missing. */
export function sketchBytes(count: number, missing = 0): Uint8Array {
  const sketch = new NumericSketch();
  for (let value = 1; value <= count; value++) sketch.add(value);
  if (missing > 0) sketch.addMissing(missing);
  return sketch.encode();
}

export function segment(slice: string, events: number, paneStartMs = 0, features = ["temp"]): SegmentWrite {
  const body = encodeSegmentBody(features.map((feature) => [feature, sketchBytes(events - 1, 1)]));
  return { paneStartMs, slice, events, body };
}

/** A checkpoint of `events` events in one pane, half of them in the slice `depot=north`, the rest in `depot=south`. */
export function checkpoint(
  fromOffset: number,
  events: number,
  changes: Partial<Checkpoint> = {},
): Checkpoint {
  const paneStartMs = Math.floor(fromOffset / 10) * PANE_MS;
  const north = Math.floor(events / 2);
  return {
    stream: "chill",
    topic: "parcels",
    partition: 0,
    owner: "collector-a",
    epoch: 1,
    fromOffset,
    toOffset: fromOffset + events,
    gaps: [],
    events,
    lateEvents: 0,
    deadLetters: {},
    maxEventMs: paneStartMs + 5,
    segments: [
      segment("all", events, paneStartMs),
      segment("depot=north", north, paneStartMs),
      segment("depot=south", events - north, paneStartMs),
    ],
    atMs: 1_000 + fromOffset,
    ...changes,
  };
}

export const CLAIM = {
  stream: "chill",
  topic: "parcels",
  partition: 0,
  owner: "collector-a",
  startOffset: 0,
  sourceId: "cluster-1",
  atMs: 500,
} as const;

export function rollup(feature: string, changes: Partial<RollupRow> = {}): RollupRow {
  return {
    level: "pane",
    startMs: 0,
    slice: "all",
    feature,
    events: 10,
    amended: false,
    body: sketchBytes(9, 1),
    ...changes,
  };
}

export function evaluation(feature: string, changes: Partial<EvaluationRow> = {}): EvaluationRow {
  return {
    stream: "chill",
    horizon: "5m",
    windowStartMs: 0,
    windowEndMs: 5 * PANE_MS,
    baselineId: "base-1",
    slice: "all",
    feature,
    state: "holding",
    events: 10,
    amended: false,
    comparison: { ks: { distance: 0.125 } },
    evaluatedAtMs: 2_000,
    ...changes,
  };
}

export function state(feature: string, changes: Partial<FeatureStateRow> = {}): FeatureStateRow {
  return {
    stream: "chill",
    horizon: "5m",
    slice: "all",
    feature,
    state: "holding",
    sinceMs: 0,
    windowEndMs: 5 * PANE_MS,
    baselineId: "base-1",
    memory: { beyond: 0 },
    sentence: "within tolerance",
    ...changes,
  };
}

export function commitOf(lease: Lease, changes: Partial<EvaluationCommit> = {}): EvaluationCommit {
  return {
    stream: "chill",
    lease,
    progress: { watermarkMs: 300_000, closedThroughMs: 240_000, evaluatedAtMs: 2_000 },
    rollups: [],
    settledSegments: [],
    evaluations: [],
    states: [],
    logbook: [],
    ...changes,
  };
}

/** An entry of the logbook. */
export function entry(subject: string) {
  return {
    atMs: 7,
    stream: "chill",
    kind: "state-change",
    subject,
    sentence: "it moved",
    detail: { distance: 0.5 },
  } as const;
}

/** Rolls pane 0 up from all its segments, with its hour, as an evaluator does. */
export async function rollUpPane(target: Store, lease: Lease): Promise<void> {
  const segments = await target.panes.segments("chill", 0);
  const slices = [...new Set(segments.map((one) => one.slice))];
  const panes = slices.map((slice) => {
    const own = segments.filter((one) => one.slice === slice);
    const sketches = own.map((one) => NumericSketch.decode(decodeSegmentBody(one.body).get("temp")!));
    const events = own.reduce((sum, one) => sum + one.events, 0);
    return rollup("temp", { slice, events, body: NumericSketch.merge(sketches).encode() });
  });
  const rollups = [...panes, ...panes.map((row) => ({ ...row, level: "hour" as const }))];
  await target.evaluations.commit(
    commitOf(lease, { rollups, settledSegments: segments.map((one) => one.id) }),
  );
}
