import { MoorlineError } from "@moorline/errors";
import { beforeEach, describe, expect, it } from "vitest";
import type { Store } from "../../src/index.js";
import { CLAIM, checkpoint, segment } from "../store-parts.js";
import type { LawBench } from "./law-bench.js";

export function ingestLaws(bench: LawBench): void {
  describe("ingest", () => {
    let store: Store;
    beforeEach(() => {
      store = bench.store;
    });

    it("claimPartition starts an unknown partition where it is told and an old one where it stands", async () => {
      expect(await store.ingest.claimPartition({ ...CLAIM, startOffset: 40 })).toEqual({
        epoch: 1,
        nextOffset: 40,
        sourceId: "cluster-1",
        status: "reading",
      });
      await store.ingest.commitCheckpoint(checkpoint(40, 10));

      const again = await store.ingest.claimPartition({ ...CLAIM, startOffset: 0, sourceId: "cluster-2" });
      expect(again).toEqual({ epoch: 2, nextOffset: 50, sourceId: "cluster-1", status: "reading" });
    });

    it("claimPartition gives every one of many claims at once its own epoch", async () => {
      const stores = [store, await bench.another(), await bench.another()];
      const claims = await Promise.all(
        Array.from({ length: 30 }, (_, index) => stores[index % 3]!.ingest.claimPartition(CLAIM)),
      );
      expect(claims.map((claim) => claim.epoch).toSorted((a, b) => a - b)).toEqual(
        Array.from({ length: 30 }, (_, index) => index + 1),
      );
    });

    it("commitCheckpoint adds up what the partition has seen", async () => {
      await store.ingest.claimPartition(CLAIM);
      await store.ingest.commitCheckpoint(checkpoint(0, 10, { lateEvents: 2 }));
      await store.ingest.commitCheckpoint(
        checkpoint(10, 10, { toOffset: 25, deadLetters: { "not-json": 2, __proto__: 1 }, maxEventMs: 3 }),
      );
      await store.ingest.commitCheckpoint(
        checkpoint(25, 0, { toOffset: 27, segments: [], maxEventMs: null, atMs: 9_000 }),
      );

      const [partition] = await store.ingest.partitions("chill");
      expect(partition).toMatchObject({
        nextOffset: 27,
        startOffset: 0,
        events: 20,
        lateEvents: 2,
        deadLetters: 2,
        maxEventMs: 5,
        lastEventAtMs: 1_010,
        updatedAtMs: 9_000,
      });
    });

    it("commitCheckpoint of an older epoch writes nothing (two owners)", async () => {
      const rival = await bench.another();
      await store.ingest.claimPartition(CLAIM);
      await rival.ingest.claimPartition({ ...CLAIM, owner: "collector-b" });

      expect(await store.ingest.commitCheckpoint(checkpoint(0, 10))).toEqual({
        outcome: "fenced",
        epoch: 2,
        nextOffset: 0,
      });
      expect(await store.panes.pendingPanes("chill")).toEqual([]);

      const ours = checkpoint(0, 10, { epoch: 2, owner: "collector-b" });
      expect(await rival.ingest.commitCheckpoint(ours)).toEqual({ outcome: "committed" });
      expect(await store.ingest.setPartitionStatus(CLAIM, 1, "halted", "old", 1)).toBe(false);
      expect((await store.ingest.partitions("chill"))[0]).toMatchObject({ events: 10, status: "reading" });
      expect((await store.audit()).findings).toEqual([]);
    });

    it("commitCheckpoint written again is fenced at the offset it had reached, and counts once", async () => {
      await store.ingest.claimPartition(CLAIM);
      await store.ingest.commitCheckpoint(checkpoint(0, 10));
      expect(await store.ingest.commitCheckpoint(checkpoint(0, 10))).toEqual({
        outcome: "fenced",
        epoch: 1,
        nextOffset: 10,
      });
      expect((await store.ingest.partitions("chill"))[0]!.events).toBe(10);
    });

    it("commitCheckpoint of two writers at once lets one through", async () => {
      const rival = await bench.another();
      await store.ingest.claimPartition(CLAIM);
      const outcomes = await Promise.all(
        [store, rival, store, rival].map((writer) => writer.ingest.commitCheckpoint(checkpoint(0, 10))),
      );
      expect(outcomes.map((outcome) => outcome.outcome).toSorted()).toEqual([
        "committed",
        "fenced",
        "fenced",
        "fenced",
      ]);
      expect((await store.audit()).findings).toEqual([]);
    });

    it("commitCheckpoint refuses what does not add up and writes nothing of it", async () => {
      await store.ingest.claimPartition(CLAIM);
      const wrong = [
        checkpoint(10, 10, { toOffset: 5 }),
        checkpoint(0, 10, { events: 11 }),
        checkpoint(0, 10, { toOffset: 9 }),
        checkpoint(0, 10, { lateEvents: 11 }),
        checkpoint(0, 10, { deadLetters: { "not-json": 1 } }),
        checkpoint(0, 10, { deadLetters: { "not-json": -1 } }),
        checkpoint(0, 10, { toOffset: 0 }),
        checkpoint(0, 10, { toOffset: 2 ** 53 }),
        checkpoint(0, 10, { maxEventMs: Number.NaN }),
        checkpoint(0, 10, { gaps: [gap(0, 11)] }),
        checkpoint(0, 10, { gaps: [gap(5, 5)] }),
        checkpoint(0, 10, { toOffset: 30, gaps: [gap(10, 20), gap(15, 25)] }),
        checkpoint(0, 10, { gaps: [{ ...gap(2, 3), topic: "other" }] }),
        checkpoint(0, 10, { segments: [segment("all", 10), segment("depot=north", 9)] }),
        checkpoint(0, 10, { segments: [segment("all", 5), segment("all", 5)] }),
      ];
      for (const one of wrong) {
        const refused = await store.ingest.commitCheckpoint(one).catch((error: unknown) => error);
        expect(refused).toBeInstanceOf(MoorlineError);
        expect((refused as MoorlineError).code).toBe("MOORLINE_INPUT_CHECKPOINT");
      }
      expect((await store.ingest.partitions("chill"))[0]).toMatchObject({ nextOffset: 0, events: 0 });
    });

    it("gaps are kept with their reason and told in the logbook once", async () => {
      await store.ingest.claimPartition(CLAIM);
      const withGap = checkpoint(0, 10, { toOffset: 30, gaps: [gap(0, 20)] });
      await store.ingest.commitCheckpoint(withGap);
      await store.ingest.commitCheckpoint(withGap);

      expect(await store.ingest.gaps("chill")).toEqual([gap(0, 20)]);
      const entries = await store.logbook.entries({ stream: "chill", kind: "offset-gap", limit: 10 });
      expect(entries.map((entry) => [entry.subject, entry.detail])).toEqual([
        ["parcels/0", { fromOffset: 0, toOffset: 20, reason: "retention" }],
      ]);
    });

    it("setPartitionStatus is told in the logbook when it changes", async () => {
      await store.ingest.claimPartition(CLAIM);
      expect(await store.ingest.setPartitionStatus(CLAIM, 1, "log-rewound", "ends at 3", 7)).toBe(true);
      expect(await store.ingest.setPartitionStatus(CLAIM, 1, "log-rewound", "ends at 3", 8)).toBe(true);
      expect((await store.ingest.partitions("chill"))[0]!.status).toBe("log-rewound");
      expect((await store.ingest.claimPartition(CLAIM)).status).toBe("log-rewound");
      expect(await store.logbook.entries({ kind: "log-rewound", limit: 10 })).toHaveLength(1);
    });
  });
}

function gap(fromOffset: number, toOffset: number) {
  return { topic: "parcels", partition: 0, fromOffset, toOffset, reason: "retention" };
}
