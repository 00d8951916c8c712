import { beforeEach, describe, expect, it } from "vitest";
import type { Store } from "../../src/index.js";
import { commitOf, entry, evaluation, rollup, state } from "../store-parts.js";
import type { LawBench } from "./law-bench.js";

export function evaluationLaws(bench: LawBench): void {
  describe("evaluations", () => {
    let store: Store;
    beforeEach(() => {
      store = bench.store;
    });

    it("acquireLease has one leader; a lease that ran out or was given back gets a new token", async () => {
      const { acquireLease, releaseLease } = store.evaluations;
      const first = await acquireLease("e", "a", 0, 100);
      expect(first).toEqual({ name: "e", owner: "a", token: 1 });
      expect(await acquireLease("e", "b", 99, 100)).toBeNull();
      expect(await acquireLease("e", "a", 99, 100)).toEqual(first);
      expect(await acquireLease("e", "b", 199, 100)).toEqual({ name: "e", owner: "b", token: 2 });
      expect(await acquireLease("e", "b", 400, 100)).toEqual({ name: "e", owner: "b", token: 3 });
      await releaseLease({ name: "e", owner: "b", token: 3 });
      expect((await acquireLease("e", "c", 401, 100))!.token).toBeGreaterThan(3);
    });

    it("acquireLease of many at once makes one of them the leader", async () => {
      const rival = await bench.another();
      const taken = await Promise.all(
        Array.from({ length: 12 }, (_, index) =>
          [store, rival][index % 2]!.evaluations.acquireLease("e", `owner-${index}`, 0, 1_000),
        ),
      );
      expect(taken.filter((lease) => lease !== null)).toHaveLength(1);
    });

    it("commit of a leader that another one followed, or that gave up, writes nothing", async () => {
      const old = (await store.evaluations.acquireLease("e", "a", 0, 100))!;
      const next = (await store.evaluations.acquireLease("e", "b", 100, 100))!;
      const batch = { rollups: [rollup("temp")], states: [state("temp")] };
      expect(await store.evaluations.commit(commitOf(old, batch))).toBe("fenced");
      await store.evaluations.releaseLease(next);
      expect(await store.evaluations.commit(commitOf(next, batch))).toBe("fenced");
      expect(await store.panes.slices("chill")).toEqual([]);
      expect(await store.evaluations.states("chill")).toEqual([]);
      expect(await store.evaluations.progress("chill")).toBeNull();
    });

    it("commit written twice changes nothing", async () => {
      const lease = (await store.evaluations.acquireLease("e", "a", 0, 100))!;
      const batch = commitOf(lease, {
        rollups: [rollup("temp"), rollup("hum", { slice: "depot=north" })],
        evaluations: [evaluation("temp"), evaluation("temp", { horizon: "1h" })],
        states: [state("temp"), state("hum", { baselineId: null })],
        logbook: [entry("temp"), entry("hum")],
      });
      const all = async () => ({
        rollups: await store.panes.rollups({ stream: "chill", level: "pane", fromMs: 0, toMs: 1 }),
        evaluations: await store.evaluations.evaluations({ stream: "chill", fromMs: 0, toMs: 9e9 }),
        states: await store.evaluations.states("chill"),
        progress: await store.evaluations.progress("chill"),
        logbook: await store.logbook.entries({ limit: 10 }),
      });
      await store.evaluations.commit(batch);
      const once = await all();
      await store.evaluations.commit(batch);

      expect(await all()).toEqual(once);
      expect(once.evaluations).toHaveLength(2);
      expect(once.states).toEqual([state("hum", { baselineId: null }), state("temp")]);
      expect(once.logbook.map((line) => line.subject)).toEqual(["hum", "temp"]);
      expect(once.progress).toEqual(batch.progress);
    });

    it("commit of two rows with one key keeps the later, in one batch and over two", async () => {
      const lease = (await store.evaluations.acquireLease("e", "a", 0, 100))!;
      const later = evaluation("temp", { state: "adrift", amended: true, comparison: null, events: 12 });
      await store.evaluations.commit(
        commitOf(lease, {
          rollups: [rollup("temp"), rollup("temp", { events: 11 })],
          evaluations: [evaluation("temp"), later],
          states: [state("temp"), state("temp", { state: "straining" })],
        }),
      );
      await store.evaluations.commit(commitOf(lease, { rollups: [rollup("temp", { amended: true })] }));

      expect(await store.evaluations.evaluations({ stream: "chill", fromMs: 0, toMs: 9e9 })).toEqual([later]);
      expect((await store.evaluations.states("chill"))[0]!.state).toBe("straining");
      const query = { stream: "chill", level: "pane", fromMs: 0, toMs: 1 } as const;
      expect(await store.panes.rollups(query)).toEqual([rollup("temp", { amended: true })]);
    });

    it("the same state change at another time is another entry of the logbook", async () => {
      const lease = (await store.evaluations.acquireLease("e", "a", 0, 100))!;
      const logbook = [entry("temp"), { ...entry("temp"), atMs: 8 }];
      await store.evaluations.commit(commitOf(lease, { logbook }));
      expect(await store.logbook.entries({ limit: 10 })).toHaveLength(2);
    });

    it("evaluations answers by window end, horizon, slice, feature and baseline", async () => {
      const lease = (await store.evaluations.acquireLease("e", "a", 0, 100))!;
      const evaluations = [
        evaluation("temp", { windowEndMs: 300 }),
        evaluation("temp", { windowEndMs: 200, slice: "depot=north" }),
        evaluation("hum", { windowEndMs: 100, horizon: "1h", baselineId: "base-2" }),
      ];
      await store.evaluations.commit(commitOf(lease, { evaluations }));
      const ends = async (query: object) =>
        (await store.evaluations.evaluations({ stream: "chill", fromMs: 0, toMs: 300, ...query })).map(
          (row) => row.windowEndMs,
        );

      expect(await ends({})).toEqual([100, 200, 300]);
      expect(await ends({ fromMs: 100, toMs: 299 })).toEqual([200]);
      expect(await ends({ horizon: "5m" })).toEqual([200, 300]);
      expect(await ends({ slice: "all", feature: "temp" })).toEqual([300]);
      expect(await ends({ baselineId: "base-2" })).toEqual([100]);
    });

    it("commit takes 5,000 rollups of 3 KB and gives them back", async () => {
      const lease = (await store.evaluations.acquireLease("e", "a", 0, 100))!;
      const body = new Uint8Array(3_000).map((_, index) => index % 251);
      const rollups = Array.from({ length: 5_000 }, (_, index) => rollup(`feature-${index}`, { body }));
      await store.evaluations.commit(commitOf(lease, { rollups }));
      const found = await store.panes.rollups({ stream: "chill", level: "pane", fromMs: 0, toMs: 1 });
      expect(found).toHaveLength(5_000);
      expect(found.every((row) => Buffer.compare(row.body, body) === 0)).toBe(true);
    });
  });
}
