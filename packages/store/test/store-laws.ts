import { MoorlineError } from "@moorline/errors";
import { NumericSketch } from "@moorline/sketch";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import {
  decodeSegmentBody,
  encodeSegmentBody,
  type Lease,
  openStore,
  type Store,
  type StoreAddress,
} from "../src/index.js";
import {
  CLAIM,
  checkpoint,
  commitOf,
  evaluation,
  PANE_MS,
  rollup,
  segment,
  sketchBytes,
  state,
} from "./store-parts.js";

/** A new empty store, and how to be rid of it. */
export interface FreshStore {
  readonly address: StoreAddress;
  drop(): Promise<void>;
}

const CONTROL = "a\u0000b\u0001\n\t\u007f\"\\'; DROP TABLE segment; --\u2400\u202e";
const NAMES = ["__proto__", "constructor", "", " ", CONTROL, "half \ud800 pair", "\u{1f9ca} é é", "%_'$1?"];

/** What every engine must do; run for each of them. */
export function storeLaws(engine: string, fresh: () => Promise<FreshStore>): void {
  describe(`store on ${engine}`, () => {
    let place: FreshStore;
    let store: Store;
    const others: Store[] = [];

    beforeEach(async () => {
      place = await fresh();
      store = await openStore(place.address);
    });

    afterEach(async () => {
      for (const opened of [store, ...others.splice(0)]) await opened.close();
      await place.drop();
    });

    async function another(): Promise<Store> {
      const opened = await openStore(place.address);
      others.push(opened);
      return opened;
    }

    describe("ingest", () => {
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
        const stores = [store, await another(), await another()];
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
        const rival = await another();
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
        const rival = await another();
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

    describe("panes", () => {
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

    describe("evaluations", () => {
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
        const rival = await another();
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

        expect(await store.evaluations.evaluations({ stream: "chill", fromMs: 0, toMs: 9e9 })).toEqual([
          later,
        ]);
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

    describe("baselines", () => {
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

    describe("logbook", () => {
      it("entries are newest first, filtered, and paged by id", async () => {
        const ids: number[] = [];
        for (let at = 0; at < 5; at++) ids.push(await store.logbook.append({ ...entry("temp"), atMs: at }));
        await store.logbook.append({ ...entry("hum"), stream: null, detail: undefined, atMs: 9 });

        const page = await store.logbook.entries({ subject: "temp", limit: 2 });
        expect(page.map((line) => line.id)).toEqual([ids[4], ids[3]]);
        const next = await store.logbook.entries({ subject: "temp", limit: 9, beforeId: page[1]!.id });
        expect(next.map((line) => line.atMs)).toEqual([2, 1, 0]);
        const timed = await store.logbook.entries({ stream: "chill", fromMs: 1, toMs: 3, limit: 9 });
        expect(timed.map((line) => line.atMs)).toEqual([2, 1]);
        const [newest] = await store.logbook.entries({ limit: 1 });
        expect(newest).toMatchObject({ stream: null, detail: null, subject: "hum" });
      });
    });

    describe("names are data", () => {
      it("any text comes back as it was, as stream, topic, slice, feature, horizon and reason", async () => {
        for (const name of NAMES) {
          const key = { stream: `s${name}`, topic: `t${name}`, partition: 0 };
          await store.ingest.claimPartition({ ...CLAIM, ...key, sourceId: name });
          const slices = [segment("all", 10, 0, [name]), segment(`k=${name}`, 10, 0, [name])];
          await store.ingest.commitCheckpoint(checkpoint(0, 10, { ...key, segments: slices }));
          const lease = (await store.evaluations.acquireLease(name, name, 0, 100))!;
          await store.evaluations.commit(
            commitOf(lease, {
              stream: key.stream,
              rollups: [rollup(name, { slice: name })],
              evaluations: [evaluation(name, { stream: key.stream, horizon: name, comparison: { name } })],
              states: [state(name, { stream: key.stream, slice: name, sentence: name })],
              logbook: [{ ...entry(name), stream: key.stream, sentence: name, detail: { name } }],
            }),
          );

          const [partition] = await store.ingest.partitions(key.stream);
          expect(partition).toMatchObject({ ...key, sourceId: name });
          const segments = await store.panes.segments(key.stream, 0);
          expect(segments.map((one) => one.slice)).toEqual(["all", `k=${name}`].toSorted());
          expect([...decodeSegmentBody(segments[0]!.body).keys()]).toEqual([name]);
          const query = {
            stream: key.stream,
            level: "pane",
            fromMs: 0,
            toMs: 1,
            slice: name,
            feature: name,
          } as const;
          expect((await store.panes.rollups(query)).map((row) => row.feature)).toEqual([name]);
          const [found] = await store.evaluations.evaluations({
            ...query,
            toMs: 9e9,
            horizon: name,
            slice: "all",
          });
          expect(found).toMatchObject({ horizon: name, feature: name, comparison: { name } });
          expect(await store.evaluations.states(key.stream)).toMatchObject([{ slice: name, sentence: name }]);
          expect(await store.logbook.entries({ stream: key.stream, limit: 9 })).toMatchObject([
            { subject: name, sentence: name, detail: { name } },
          ]);
        }
        expect((await store.audit()).findings.filter((finding) => finding.invariant === 1)).toEqual([]);
      });

      it("names of the longest kind that the config and the events allow are kept", async () => {
        const noise = (length: number) =>
          Array.from({ length }, (_, index) => String.fromCharCode(0x4e00 + ((index * 7_919) % 20_000))).join(
            "",
          );
        const [feature, slice, stream] = [noise(128), `${noise(100)}=${noise(200)}`, noise(64)];
        const lease = (await store.evaluations.acquireLease("e", "a", 0, 100))!;
        const batch = {
          stream,
          rollups: [rollup(feature, { slice })],
          evaluations: [evaluation(feature, { stream, slice, baselineId: "b".repeat(64) })],
        };
        await store.evaluations.commit(commitOf(lease, batch));
        expect(await store.panes.slices(stream)).toEqual([slice]);
        expect(await store.evaluations.evaluations({ stream, fromMs: 0, toMs: 9e9 })).toHaveLength(1);
      });

      it("a name of 10 kB is refused as an argument, on either engine, and nothing is written", async () => {
        const long = Array.from({ length: 10_000 }, (_, index) => ((index * 7_919) % 36).toString(36)).join(
          "",
        );
        const lease = (await store.evaluations.acquireLease("e", "a", 0, 100))!;
        const refused = [
          () => store.ingest.claimPartition({ ...CLAIM, topic: long }),
          () => store.evaluations.commit(commitOf(lease, { rollups: [rollup("a"), rollup(long)] })),
          () => store.evaluations.commit(commitOf(lease, { states: [state("a", { slice: long })] })),
          () => store.evaluations.acquireLease(long, "a", 0, 1),
        ];
        for (const call of refused) {
          await expect(call()).rejects.toMatchObject({ code: "MOORLINE_INPUT_STORE_NAME" });
        }
        expect(await store.panes.slices("chill")).toEqual([]);
        const body = encodeSegmentBody([[long, sketchBytes(9, 1)]]);
        await store.ingest.claimPartition(CLAIM);
        await store.ingest.commitCheckpoint(
          checkpoint(0, 10, { segments: [{ paneStartMs: 0, slice: "all", events: 10, body }] }),
        );
        expect((await store.audit()).findings).toEqual([]);
      });
    });

    describe("audit", () => {
      it("finds nothing while checkpoints and rollups go on being written", async () => {
        const [collector, evaluator] = [await another(), await another()];
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
          while (writing) await rollUp(evaluator, lease);
          await rollUp(evaluator, lease);
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
        await rollUp(store, lease);
        expect((await store.audit()).findings).toEqual([]);
        const rollups = [rollup("temp", { level: "hour", events: 11 }), rollup("hum")];
        await store.evaluations.commit(commitOf(lease, { rollups }));
        expect((await store.audit()).findings.map(({ where, sentence }) => `${where}: ${sentence}`)).toEqual([
          "pane 1970-01-01T00:00:00.000Z, all, hum: the rollup is wrong: it holds 10 (events), its segments hold 0",
          "hour 1970-01-01T00:00:00.000Z, all, temp: the rollup holds 11 events, its panes hold 10",
        ]);
      });
    });

    it("says that it is closed once it was closed", async () => {
      const closed = await openStore(place.address);
      await closed.close();
      await expect(closed.ping()).rejects.toMatchObject({ code: "MOORLINE_STATE_STORE_CLOSED" });
      await expect(closed.ingest.commitCheckpoint(checkpoint(0, 10))).rejects.toMatchObject({
        code: "MOORLINE_STATE_STORE_CLOSED",
      });
      await closed.close();
    });

    it("migrate again, and by several at once, changes nothing", async () => {
      await store.ingest.claimPartition(CLAIM);
      const rival = await another();
      await Promise.all([store.migrate(), rival.migrate(), store.migrate(), rival.migrate()]);
      expect(await store.ingest.partitions("chill")).toHaveLength(1);
      await rival.ping();
    });
  });
}

/** Rolls pane 0 up from all its segments, with its hour, as an evaluator does. */
async function rollUp(target: Store, lease: Lease): Promise<void> {
  const segments = await target.panes.segments("chill", 0);
  const slices = [...new Set(segments.map((one) => one.slice))];
  const panes = slices.map((slice) => {
    const own = segments.filter((one) => one.slice === slice);
    const sketches = own.map((one) => NumericSketch.decode(decodeSegmentBody(one.body).get("temp")!));
    const events = own.reduce((sum, one) => sum + one.events, 0);
    return rollup("temp", { slice, events, body: NumericSketch.merge(sketches).encode() });
  });
  const rollups = [...panes, ...panes.map((row) => ({ ...row, level: "hour" as const }))];
  await target.evaluations.commit(
    commitOf(lease, { rollups, settledSegments: segments.map((one) => one.id) }),
  );
}

function gap(fromOffset: number, toOffset: number) {
  return { topic: "parcels", partition: 0, fromOffset, toOffset, reason: "retention" };
}

function entry(subject: string) {
  return {
    atMs: 7,
    stream: "chill",
    kind: "state-change",
    subject,
    sentence: "it moved",
    detail: { distance: 0.5 },
  } as const;
}
