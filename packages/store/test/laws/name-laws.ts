import { beforeEach, describe, expect, it } from "vitest";
import { decodeSegmentBody, encodeSegmentBody, type Store } from "../../src/index.js";
import {
  CLAIM,
  checkpoint,
  commitOf,
  entry,
  evaluation,
  rollup,
  segment,
  sketchBytes,
  state,
} from "../store-parts.js";
import type { LawBench } from "./law-bench.js";

const CONTROL = "a\u0000b\u0001\n\t\u007f\"\\'; DROP TABLE segment; --\u2400\u202e";
const NAMES = ["__proto__", "constructor", "", " ", CONTROL, "half \ud800 pair", "\u{1f9ca} é é", "%_'$1?"];

export function nameLaws(bench: LawBench): void {
  describe("names are data", () => {
    let store: Store;
    beforeEach(() => {
      store = bench.store;
    });

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
      const long = Array.from({ length: 10_000 }, (_, index) => ((index * 7_919) % 36).toString(36)).join("");
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
}
