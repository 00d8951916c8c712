import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { BaselineWatch } from "../src/baseline-watch.js";
import { CollectorBench, parcels } from "./collected.js";

let bench: CollectorBench;
beforeEach(async () => {
  bench = await CollectorBench.open();
});
afterEach(() => bench.close());

async function activate(id: string, manifest: unknown): Promise<void> {
  await bench.store.baselines.put(
    { id, stream: "chill-risk", createdAtMs: 1, createdBy: "test", note: "", manifest },
    [],
  );
  await bench.store.baselines.activate("chill-risk", id, "test", 2);
}

const MANIFEST = {
  thresholds: [
    { slice: "all", feature: "cargo_temp", values: [1, 4] },
    { slice: "depot=north", feature: "cargo_temp", values: [2, 3] },
  ],
  atoms: [{ slice: "all", feature: "cargo_temp", values: [0.5] }],
};

describe("BaselineWatch", () => {
  it("optionsFor() gives the slice's own thresholds, else those of the whole", async () => {
    await activate("b1", MANIFEST);
    const watch = new BaselineWatch(bench.store, "chill-risk");

    expect(watch.optionsFor("all", "cargo_temp")).toEqual({});
    expect(await watch.refresh()).toBe(true);
    expect(await watch.refresh()).toBe(false);
    expect(watch.optionsFor("depot=north", "cargo_temp").thresholds).toEqual({ id: "b1", values: [2, 3] });
    expect(watch.optionsFor("depot=south", "cargo_temp")).toEqual({
      thresholds: { id: "b1", values: [1, 4] },
      knownAtoms: [0.5],
    });
    expect(watch.optionsFor("all", "door_openings")).toEqual({});
  });

  it("refresh() follows the active baseline and takes a manifest without thresholds", async () => {
    const watch = new BaselineWatch(bench.store, "chill-risk");
    await activate("b1", MANIFEST);
    await watch.refresh();
    await activate("b2", { rows: 5 });

    expect(await watch.refresh()).toBe(true);
    expect(watch.baselineId).toBe("b2");
    expect(watch.optionsFor("all", "cargo_temp")).toEqual({});
  });

  it("startCollector() counts exactly at the active baseline's thresholds", async () => {
    await activate("b1", MANIFEST);
    const lines = parcels(0, 1000);
    const path = await bench.write("a.ndjson", lines);
    await bench.readToEnd(bench.config(bench.fileStream([path])));

    const temps = lines.map((line) => JSON.parse(line).cargo.temp as number);
    const sketch = (await bench.counted()).get("all")?.get("cargo_temp");
    expect(sketch?.thresholdCounts()).toEqual({
      id: "b1",
      values: [1, 4],
      counts: [1, 4].map((threshold) => temps.filter((temp) => temp <= threshold).length),
    });
  });
});
