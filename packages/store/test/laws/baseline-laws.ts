import { beforeEach, describe, expect, it } from "vitest";
import type { Store } from "../../src/index.js";
import { sketchBytes } from "../store-parts.js";
import type { LawBench } from "./law-bench.js";

export function baselineLaws(bench: LawBench): void {
  describe("baselines", () => {
    let store: Store;
    beforeEach(() => {
      store = bench.store;
    });

    const record = {
      id: "base-1",
      stream: "chill",
      createdAtMs: 10,
      createdBy: "ana",
      note: "",
      manifest: { rows: 100, thresholds: { all: [1, 2] } },
    };
    const parts = [
      { slice: "all", feature: "temp", block: -1, body: sketchBytes(4) },
      { slice: "all", feature: "temp", block: 0, body: sketchBytes(2) },
      { slice: "depot=north", feature: "hum", block: -1, body: sketchBytes(3) },
    ];

    it("put writes a baseline once and never changes it", async () => {
      expect(await store.baselines.put(record, parts)).toBe(true);
      expect(await store.baselines.put({ ...record, note: "other" }, [])).toBe(false);
      expect(await store.baselines.get("base-1")).toEqual(record);
      expect(await store.baselines.get("base-2")).toBeNull();
      expect(await store.baselines.parts("base-1")).toEqual(parts);
      expect(await store.baselines.parts("base-1", { block: -1, slice: "all" })).toEqual([parts[0]]);
      expect(await store.baselines.parts("base-1", { feature: "hum" })).toEqual([parts[2]]);
    });

    it("list is newest first and of one stream", async () => {
      await store.baselines.put(record, []);
      await store.baselines.put({ ...record, id: "base-2", createdAtMs: 20 }, []);
      await store.baselines.put({ ...record, id: "base-3", stream: "other" }, []);
      expect((await store.baselines.list("chill")).map((one) => one.id)).toEqual(["base-2", "base-1"]);
    });

    it("activate names a known baseline of the stream, once in the logbook", async () => {
      await store.baselines.put(record, []);
      expect(await store.baselines.active("chill")).toBeNull();
      await store.baselines.activate("chill", "base-1", "ana", 30);
      await store.baselines.activate("chill", "base-1", "ana", 40);
      expect(await store.baselines.active("chill")).toEqual({ baselineId: "base-1", sinceMs: 30 });
      expect(await store.logbook.entries({ kind: "baseline-activated", limit: 9 })).toHaveLength(1);

      for (const [stream, id] of [
        ["chill", "base-9"],
        ["other", "base-1"],
      ] as const) {
        await expect(store.baselines.activate(stream, id, "ana", 50)).rejects.toMatchObject({
          code: "MOORLINE_STATE_UNKNOWN_BASELINE",
        });
      }
      expect(await store.baselines.active("chill")).toEqual({ baselineId: "base-1", sinceMs: 30 });
    });
  });
}
