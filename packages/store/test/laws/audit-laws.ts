import { beforeEach, describe, expect, it } from "vitest";
import type { Store } from "../../src/index.js";
import { CLAIM, checkpoint, commitOf, rollUpPane, rollup, segment } from "../store-parts.js";
import type { LawBench } from "./law-bench.js";

export function auditLaws(bench: LawBench): void {
  describe("audit", () => {
    let store: Store;
    beforeEach(() => {
      store = bench.store;
    });

    it("finds nothing while checkpoints and rollups go on being written", async () => {
      const [collector, evaluator] = [await bench.another(), await bench.another()];
      await store.ingest.claimPartition(CLAIM);
      const lease = (await store.evaluations.acquireLease("e", "a", 0, 1_000))!;
      let writing = true;
      const collecting = (async () => {
        for (let at = 0; at < 600; at += 10) {
          const segments = [segment("all", 10, 0), segment("depot=north", 10, 0)];
          await collector.ingest.commitCheckpoint(checkpoint(at, 10, { segments }));
        }
        writing = false;
      })();
      const evaluating = (async () => {
        while (writing) await rollUpPane(evaluator, lease);
        await rollUpPane(evaluator, lease);
      })();
      let audits = 0;
      while (writing) {
        expect((await store.audit()).findings).toEqual([]);
        audits++;
      }
      await Promise.all([collecting, evaluating]);
      expect(audits).toBeGreaterThan(1);
      const report = await store.audit();
      expect(report.findings).toEqual([]);
      expect(report.streams[0]).toMatchObject({ checkpoints: 60, segments: 120, events: 600 });
      expect(await store.panes.pendingPanes("chill")).toEqual([]);
    });

    it("finds a rollup that holds something else than its segments, and an hour that does not hold its panes", async () => {
      const lease = (await store.evaluations.acquireLease("e", "a", 0, 1_000))!;
      await store.ingest.claimPartition(CLAIM);
      await store.ingest.commitCheckpoint(checkpoint(0, 10));
      await rollUpPane(store, lease);
      expect((await store.audit()).findings).toEqual([]);
      const rollups = [rollup("temp", { level: "hour", events: 11 }), rollup("hum")];
      await store.evaluations.commit(commitOf(lease, { rollups }));
      expect((await store.audit()).findings.map(({ where, sentence }) => `${where}: ${sentence}`)).toEqual([
        "pane 1970-01-01T00:00:00.000Z, all, hum: the rollup is wrong: it holds 10 (events), its segments hold 0",
        "hour 1970-01-01T00:00:00.000Z, all, temp: the rollup holds 11 events, its panes hold 10",
      ]);
    });
  });
}
