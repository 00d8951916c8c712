// Commits and reads of a store, on SQLite in a temporary folder or on the PostgreSQL of the address given (an empty database). Progress
// on stderr, one JSON object as the last line of stdout: medians in milliseconds.
import { mkdtempSync, rmSync } from "node:fs";
import os from "node:os";
import { join } from "node:path";
import { NumericSketch } from "@moorline/sketch";
import { encodeSegmentBody, openStore } from "../dist/index.js";

const [url] = process.argv.slice(2);
const folder = mkdtempSync(join(os.tmpdir(), "moorline-measure-store-"));
const store = await openStore(
  url === undefined ? { kind: "sqlite", path: join(folder, "moorline.db") } : { kind: "postgres", url },
);
const SEED = 7_460;
const PANE_MS = 60_000;
const figures = {};

async function measure(name, rounds, run) {
  const tookMs = [];
  for (let round = 0; round < rounds; round++) {
    const startMs = performance.now();
    await run(round);
    tookMs.push(performance.now() - startMs);
  }
  figures[name] = Number(tookMs.toSorted((a, b) => a - b)[rounds >> 1].toFixed(2));
  process.stderr.write(`${name}: ${figures[name]} ms\n`);
}

/** Bytes without a pattern, as sketches are. */
function noise(length, seed) {
  let state = seed;
  return Uint8Array.from({ length }, () => {
    state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
    return state >>> 24;
  });
}

const lease = await store.evaluations.acquireLease("measure", "measure", 0, 1e9);
const progress = { watermarkMs: 0, closedThroughMs: 0, evaluatedAtMs: 0 };
const empty = {
  stream: "s",
  lease,
  progress,
  rollups: [],
  settledSegments: [],
  evaluations: [],
  states: [],
  logbook: [],
};
const bodies = Array.from({ length: 50 }, (_, index) => noise(3_000, SEED + index));
const rollupsOf = (round) =>
  Array.from({ length: 5_000 }, (_, index) => ({
    level: "pane",
    startMs: PANE_MS * round,
    slice: "all",
    feature: `feature_${index}`,
    events: 10,
    amended: false,
    body: bodies[index % bodies.length],
  }));
await measure("commit5000RollupsOf3KbMs", 9, (round) =>
  store.evaluations.commit({ ...empty, rollups: rollupsOf(round) }),
);
const panes = (from, to, more) =>
  store.panes.rollups({ stream: "s", level: "pane", fromMs: from * PANE_MS, toMs: to * PANE_MS, ...more });
await measure("readPaneOf5000RollupsMs", 9, (round) => panes(round, round + 1));
await measure("readOneFeatureOver9PanesMs", 49, (round) =>
  panes(0, 9, { slice: "all", feature: `feature_${round}` }),
);

const evaluationsOf = (round) =>
  Array.from({ length: 4_000 }, (_, index) => ({
    stream: "s",
    horizon: "5m",
    windowStartMs: 0,
    windowEndMs: round,
    baselineId: "baseline",
    slice: "all",
    feature: `feature_${index}`,
    state: "holding",
    events: 10,
    amended: false,
    comparison: {
      ks: { distance: 0.1, at: 3, direction: "above", pValue: 0.3 },
      wasserstein: { distance: 1 },
    },
    evaluatedAtMs: round,
  }));
await measure("commit4000EvaluationsMs", 9, (round) =>
  store.evaluations.commit({ ...empty, evaluations: evaluationsOf(round) }),
);

const sketch = new NumericSketch();
for (const byte of noise(3_000, SEED)) sketch.add(byte + 0.5 * Math.sin(byte));
const body = encodeSegmentBody(
  Array.from({ length: 100 }, (_, index) => [`feature_${index}`, sketch.encode()]),
);
const key = { stream: "s", topic: "t", partition: 0 };
await store.ingest.claimPartition({ ...key, owner: "measure", startOffset: 0, sourceId: "s", atMs: 0 });
await measure("checkpointOf8SegmentsOf100FeaturesMs", 49, (round) =>
  store.ingest.commitCheckpoint({
    ...key,
    owner: "measure",
    epoch: 1,
    fromOffset: round * 24_000,
    toOffset: (round + 1) * 24_000,
    gaps: [],
    events: 24_000,
    lateEvents: 0,
    deadLetters: {},
    maxEventMs: 0,
    segments: Array.from({ length: 8 }, (_, pane) => ({
      paneStartMs: pane * PANE_MS,
      slice: "all",
      events: 3_000,
      body,
    })),
    atMs: round,
  }),
);
await store.close();
rmSync(folder, { recursive: true, force: true });
const result = {
  measure: "store",
  engine: store.kind,
  seed: SEED,
  segmentBodyBytes: body.length,
  ...figures,
};
process.stdout.write(`${JSON.stringify({ ...result, node: process.version, cpus: os.cpus().length })}\n`);
