import { NumericSketch } from "@moorline/sketch";
import {
  type Checkpoint,
  type EvaluationCommit,
  type EvaluationRow,
  encodeSegmentBody,
  type FeatureStateRow,
  type Lease,
  type RollupRow,
  type SegmentWrite,
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
