import { join } from "node:path";
import { NumericSketch } from "@moorline/sketch";
import { freezeThresholds } from "@moorline/stats";
import { openStore, type RollupRow, type Store } from "@moorline/store";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import {
  type BaselineManifest,
  type BuiltBaseline,
  buildWindowBaseline,
  findBaseline,
  loadHeldFeature,
} from "../src/index.js";
import { folder, randomOf, sampleStream } from "./sample-rows.js";

const MINUTE = 60_000;
const START = Date.UTC(2026, 0, 1);
const PANES = 60;
const EVENTS_IN_PANE = 100;
const stream = sampleStream();

let store: Store;
const valuesOf = new Map<string, number[]>();

beforeAll(async () => {
  store = await openStore({ kind: "sqlite", path: join(folder, "windows.db") });
  const lease = await store.evaluations.acquireLease("test", "me", START, MINUTE);
  const progress = { watermarkMs: START, closedThroughMs: START, evaluatedAtMs: START };
  const batch = {
    stream: stream.name,
    lease: lease!,
    progress,
    settledSegments: [],
    evaluations: [],
    states: [],
  };
  await store.evaluations.commit({ ...batch, rollups: rollups(), logbook: [] });
});
afterAll(() => store.close());

/** Panes whose sketches carry the counts of another baseline's thresholds, as those of a running stream do. */
function rollups(): RollupRow[] {
  const random = randomOf(11);
  const rows: RollupRow[] = [];
  for (let pane = 0; pane < PANES; pane++) {
    for (const { name } of stream.features) {
      for (const [slice, share] of [
        ["all", 1],
        ["depot=north", 0.5],
        ["depot=rare", 0.01],
      ] as const) {
        const sketch = new NumericSketch({ thresholds: { id: "older", values: Array(11).fill(5) } });
        for (let i = 0; i < EVENTS_IN_PANE * share; i++) {
          const value = 2 + 6 * random();
          sketch.add(value);
          const key = `${slice} ${name}`;
          valuesOf.set(key, [...(valuesOf.get(key) ?? []), value]);
        }
        const startMs = START + pane * MINUTE;
        const { events } = sketch.counts;
        rows.push({
          level: "pane",
          startMs,
          slice,
          feature: name,
          events,
          amended: false,
          body: sketch.encode(),
        });
      }
    }
  }
  return rows;
}

const request = () => ({
  stream,
  store,
  createdBy: "test",
  createdAtMs: 5,
  fromMs: START,
  toMs: START + PANES * MINUTE,
});
const manifestOfBuilt = (built: BuiltBaseline) => built.record.manifest as BaselineManifest;

describe("buildWindowBaseline", () => {
  it("holds what the windows hold: rows, slices, least and greatest value", async () => {
    const built = await buildWindowBaseline(request());
    const manifest = manifestOfBuilt(built);
    const temps = valuesOf.get("all cargo_temp")!;
    expect(manifest).toMatchObject({
      source: { kind: "windows", fromMs: START, toMs: START + PANES * MINUTE, panes: PANES },
      rows: PANES * EVENTS_IN_PANE,
      slices: [
        { slice: "all", rows: 6_000 },
        { slice: "depot=north", rows: 3_000 },
      ],
      leftOutSlices: [{ slice: "depot=rare", rows: 60 }],
      blocks: { by: "time", count: 60, lengthMs: MINUTE },
    });
    expect(manifest.features[0]).toMatchObject({
      finite: 6_000,
      min: Math.min(...temps),
      max: Math.max(...temps),
    });
  });

  it("takes only the panes that begin in the range", async () => {
    const built = await buildWindowBaseline({
      ...request(),
      fromMs: START + 10 * MINUTE,
      toMs: START + 40 * MINUTE,
    });
    expect(manifestOfBuilt(built)).toMatchObject({ rows: 3_000, source: { panes: 30 } });
  });

  it("is read back with the thresholds that its manifest names, not with those that its windows were counted for", async () => {
    const built = await buildWindowBaseline(request());
    expect(await store.baselines.put(built.record, built.parts)).toBe(true);
    const { id } = built.record;
    for (const slice of ["all", "depot=north"]) {
      const found = await loadHeldFeature(store, id, slice, "cargo_temp");
      const { side } = found.held;
      expect([side.thresholdCounts, found.slice]).toEqual([null, slice]);
      const named = manifestOfBuilt(built).thresholds.find(
        (t) => t.slice === slice && t.feature === "cargo_temp",
      );
      expect(freezeThresholds(side.cdf).map(({ value }) => value)).toEqual(named!.values);
      const values = valuesOf.get(`${slice} cargo_temp`)!;
      for (const { rank, value } of freezeThresholds(side.cdf)) {
        const share = values.filter((v) => v <= value).length / values.length;
        expect(Math.abs(share - rank)).toBeLessThan(0.01);
      }
    }
  });

  it("refuses a range without a window", async () => {
    const empty = { ...request(), fromMs: 0, toMs: MINUTE };
    await expect(buildWindowBaseline(empty)).rejects.toThrow(
      /no window of stream chill-risk from 1970-01-01/,
    );
  });
});

describe("loadHeldFeature", () => {
  it("falls back to all, and says so, for a slice without a part of its own", async () => {
    const built = await buildWindowBaseline(request());
    await store.baselines.put(built.record, built.parts);
    const all = await loadHeldFeature(store, built.record.id, "all", "doors");
    const rare = await loadHeldFeature(store, built.record.id, "depot=rare", "doors");
    expect(rare.slice).toBe("all");
    expect(rare.held.side.events).toBe(all.held.side.events);
  });

  it("gives the sway of the panes, and by how much dependence inflates a range of values", async () => {
    const built = await buildWindowBaseline(request());
    await store.baselines.put(built.record, built.parts);
    const { held } = await loadHeldFeature(store, built.record.id, "all", "cargo_temp");
    expect(held.sway).toMatchObject({ basis: "time", blocks: PANES, lengthMs: MINUTE, seasonal: null });
    const { basis, designEffect } = held.dependence(5 * MINUTE, 5 * EVENTS_IN_PANE);
    expect(basis).toBe("time");
    // Independent values: an upper limit of 1 from twelve stretches of five panes.
    for (const rank of [0.001, 0.3, 0.5, 0.99]) {
      expect(designEffect(rank)).toBeGreaterThanOrEqual(1);
      expect(designEffect(rank)).toBeLessThan(5);
    }
    // Twice the values in the same time: the excess counts twice.
    const twice = held.dependence(5 * MINUTE, 10 * EVENTS_IN_PANE).designEffect(0.5);
    expect(twice).toBeCloseTo(1 + 2 * (designEffect(0.5) - 1), 6);
  });

  it("says that a feature is not in the baseline", async () => {
    const built = await buildWindowBaseline(request());
    await expect(loadHeldFeature(store, built.record.id, "all", "speed")).rejects.toThrow(
      /holds nothing of feature speed/,
    );
  });
});

describe("findBaseline", () => {
  it("takes an id or the start of one, and refuses what is unknown or stands for several", async () => {
    const first = await buildWindowBaseline(request());
    const second = await buildWindowBaseline({ ...request(), toMs: START + 30 * MINUTE });
    for (const { record, parts } of [first, second]) await store.baselines.put(record, parts);
    expect((await findBaseline(store, stream.name, first.record.id)).id).toBe(first.record.id);
    expect((await findBaseline(store, stream.name, first.record.id.slice(0, 8))).id).toBe(first.record.id);
    await expect(findBaseline(store, stream.name, "zzzz")).rejects.toThrow(/there is no baseline zzzz/);
    await expect(findBaseline(store, stream.name, first.record.id.slice(0, 2))).rejects.toThrow(
      /there is no baseline/,
    );
    await expect(findBaseline(store, "other", first.record.id)).rejects.toThrow(/there is no baseline/);
  });
});
