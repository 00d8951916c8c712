import { beforeEach, describe, expect, it } from "vitest";
import { decodeSegmentBody, type Store } from "../../src/index.js";
import { CLAIM, checkpoint, commitOf, PANE_MS, rollup, segment } from "../store-parts.js";
import type { LawBench } from "./law-bench.js";

export function paneLaws(bench: LawBench): void {
  describe("panes", () => {
    let store: Store;
    beforeEach(() => {
      store = bench.store;
    });

    it("pendingPanes holds what no rollup contains yet, also of a transaction that committed late", async () => {
      await store.ingest.claimPartition(CLAIM);
      await store.ingest.commitCheckpoint(checkpoint(0, 10));
      const segments = await store.panes.segments("chill", 0);
      await store.ingest.commitCheckpoint(checkpoint(10, 10, { segments: [segment("all", 10, 0)] }));
      const lease = (await store.evaluations.acquireLease("e", "a", 0, 1_000))!;
      const settled = segments.map((one) => one.id);
      await store.evaluations.commit(
        commitOf(lease, { rollups: [rollup("temp")], settledSegments: settled }),
      );

      expect(await store.panes.pendingPanes("chill")).toEqual([
        { paneStartMs: 0, segments: 1, rolledUp: true },
      ]);
      await store.ingest.commitCheckpoint(checkpoint(20, 10));
      expect(await store.panes.pendingPanes("chill")).toEqual([
        { paneStartMs: 0, segments: 1, rolledUp: true },
        { paneStartMs: 2 * PANE_MS, segments: 3, rolledUp: false },
      ]);
    });

    it("segments come by topic, partition, offset and slice in code unit order", async () => {
      for (const [topic, partition] of [
        ["b", 0],
        ["B", 1],
        ["a", 10],
        ["a", 2],
      ] as const) {
        const key = { topic, partition };
        await store.ingest.claimPartition({ ...CLAIM, ...key });
        const segments = [segment("é=1", 5), segment("all", 5), segment("Z=1", 5), segment("a=1", 5)];
        await store.ingest.commitCheckpoint(checkpoint(0, 5, { ...key, segments }));
      }
      const found = await store.panes.segments("chill", 0);
      expect(found.map((one) => `${one.topic}/${one.partition} ${one.slice}`)).toEqual(
        ["B/1", "a/2", "a/10", "b/0"].flatMap((at) =>
          ["Z=1", "a=1", "all", "é=1"].map((slice) => `${at} ${slice}`),
        ),
      );
      expect([...decodeSegmentBody(found[0]!.body).keys()]).toEqual(["temp"]);
      expect(found[0]).toMatchObject({ fromOffset: 0, toOffset: 5, events: 5 });
    });

    it("rollups, slices and extent answer by level, time, slice and feature", async () => {
      const lease = (await store.evaluations.acquireLease("e", "a", 0, 1_000))!;
      const rollups = [
        rollup("b"),
        rollup("a", { slice: "depot=z", amended: true }),
        rollup("a", { startMs: PANE_MS }),
        rollup("a", { level: "hour" }),
      ];
      expect(await store.panes.extent("chill")).toBeNull();
      await store.evaluations.commit(commitOf(lease, { rollups }));

      const query = { stream: "chill", level: "pane", fromMs: 0, toMs: PANE_MS + 1 } as const;
      expect(await store.panes.rollups(query)).toEqual([rollups[0], rollups[1], rollups[2]]);
      expect(await store.panes.rollups({ ...query, slice: "depot=z", feature: "a" })).toEqual([rollups[1]]);
      expect(await store.panes.rollups({ ...query, toMs: PANE_MS, feature: "a" })).toEqual([rollups[1]]);
      expect(await store.panes.rollups({ ...query, stream: "other" })).toEqual([]);
      expect(await store.panes.slices("chill")).toEqual(["all", "depot=z"]);
      expect(await store.panes.extent("chill")).toEqual({ firstPaneMs: 0, lastPaneMs: PANE_MS });
    });
  });
}
