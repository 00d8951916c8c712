import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { type MoorlineConfig, parseConfig } from "@moorline/config";
import { NumericSketch } from "@moorline/sketch";
import { freezeThresholds } from "@moorline/stats";
import { type FeatureStateRow, openStore, type RollupRow, type Store } from "@moorline/store";

export const HOSTILE = `<script>alert("x")</script>‮=cmd|' /C calc'!A0 ${"x".repeat(60)}`;
export const PANE_MS = 60_000;
export const START_MS = Date.UTC(2026, 0, 5, 10);
export const PANES = 60;
export const BASELINE_ID = "b".repeat(64);
/** Production's values by pane: 0 … 99, the last of them ten times as large in depot north. */
export const valuesOf = (slice: string): number[] =>
  Array.from({ length: 100 }, (_, i) => (slice === "depot=north" && i >= 90 ? i * 10 : i));

export interface Seeded {
  readonly config: MoorlineConfig;
  readonly store: Store;
  close(): Promise<void>;
}

/** A store as collector and evaluator would have left it after an hour, with a feature whose name is out to do harm. */
export async function seededStore(): Promise<Seeded> {
  const folder = mkdtempSync(join(tmpdir(), "moorline-gateway-"));
  const config = parseConfig(`store: sqlite:${join(folder, "moorline.db")}
gateway: { port: 0 }
streams:
  - name: chill-risk
    source: { kafka: { brokers: ["127.0.0.1:9"], topics: [t], group: g } }
    payload: { format: json, eventTime: at }
    slices: [depot]
    horizons: [5m, 1h]
    features:
      - { name: cargo_temp, path: cargo.temp, unit: °C }
      - { name: ${JSON.stringify(HOSTILE)}, path: x }
`);
  const store = await openStore({ kind: "sqlite", path: join(folder, "moorline.db") });
  await seedBaseline(store);
  await seedPanes(store);
  return {
    config,
    store,
    close: async () => {
      await store.close();
      rmSync(folder, { recursive: true, force: true });
    },
  };
}

function sketchOf(values: readonly number[]): NumericSketch {
  const sketch = new NumericSketch();
  sketch.addColumn(Float64Array.from(values));
  return sketch;
}

async function seedBaseline(store: Store): Promise<void> {
  const whole = sketchOf(Array.from({ length: 5_000 }, (_, i) => i % 100));
  const thresholds = [
    { slice: "all", feature: "cargo_temp", values: freezeThresholds(whole.toCdf()).map((one) => one.value) },
  ];
  const record = {
    id: BASELINE_ID,
    stream: "chill-risk",
    createdAtMs: START_MS - 1,
    createdBy: "a test",
    note: "invented",
    manifest: {
      format: 1,
      thresholds,
      slices: [
        { slice: "all", rows: 5_000 },
        { slice: "depot=south", rows: 3_000 },
      ],
      leftOutSlices: [{ slice: "depot=north", rows: 2_000 }],
    },
  };
  const parts = ["cargo_temp", HOSTILE].map((feature) => ({
    slice: "all",
    feature,
    block: -1,
    body: whole.encode(),
  }));
  await store.baselines.put(record, parts);
  await store.baselines.activate("chill-risk", BASELINE_ID, "a test", START_MS);
}

async function seedPanes(store: Store): Promise<void> {
  const stream = "chill-risk";
  const lease = (await store.evaluations.acquireLease("seed", "a test", START_MS, 1_000))!;
  const rollups: RollupRow[] = [];
  for (let pane = 0; pane < PANES; pane++) {
    for (const slice of ["all", "depot=north"]) {
      for (const feature of ["cargo_temp", HOSTILE]) {
        const sketch = sketchOf(valuesOf(slice));
        const startMs = START_MS + pane * PANE_MS;
        rollups.push({
          level: "pane",
          startMs,
          slice,
          feature,
          events: 100,
          amended: false,
          body: sketch.encode(),
        });
      }
    }
  }
  const endMs = START_MS + PANES * PANE_MS;
  const state = (slice: string, value: FeatureStateRow["state"]): FeatureStateRow => ({
    stream,
    horizon: "1h",
    slice,
    feature: "cargo_temp",
    state: value,
    sinceMs: endMs,
    windowEndMs: endMs,
    baselineId: BASELINE_ID,
    memory: null,
    sentence: `it is ${value}`,
  });
  await store.evaluations.commit({
    stream,
    lease,
    progress: { watermarkMs: endMs, closedThroughMs: START_MS, evaluatedAtMs: endMs },
    rollups,
    settledSegments: [],
    evaluations: [
      {
        stream,
        horizon: "1h",
        windowStartMs: START_MS,
        windowEndMs: endMs,
        baselineId: BASELINE_ID,
        slice: "all",
        feature: "cargo_temp",
        state: "holding",
        events: 6_000,
        amended: false,
        comparison: { n: { baseline: 5_000, production: 6_000 }, ks: { distance: 0.01 }, tails: null },
        evaluatedAtMs: endMs,
      },
    ],
    states: [state("all", "holding"), state("depot=north", "adrift")],
    logbook: [
      {
        atMs: endMs,
        stream,
        kind: "state-change",
        subject: "cargo_temp",
        sentence: "it is adrift",
        detail: { from: null },
      },
    ],
  });
}
