import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { DatabaseSync } from "@photostructure/sqlite";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { type AuditFinding, openStore, type Store } from "../src/index.js";
import { CLAIM, checkpoint, commitOf, PANE_MS, rollup, segment, sketchBytes } from "./store-parts.js";

let folder: string;
let path: string;
let store: Store;

beforeEach(async () => {
  folder = mkdtempSync(join(tmpdir(), "moorline-audit-"));
  path = join(folder, "moorline.db");
  store = await openStore({ kind: "sqlite", path });
  await fill(store);
});

afterEach(async () => {
  await store.close();
  rmSync(folder, { recursive: true, force: true });
});

/** Two partitions: three checkpoints (one with a gap and dead letters) in 0, one in 1; the first pane is rolled up. */
async function fill(target: Store): Promise<void> {
  await target.ingest.claimPartition(CLAIM);
  await target.ingest.commitCheckpoint(checkpoint(0, 10));
  const reason = "retention";
  const gaps = [{ topic: "parcels", partition: 0, fromOffset: 20, toOffset: 25, reason }];
  await target.ingest.commitCheckpoint(
    checkpoint(10, 10, { toOffset: 30, gaps, lateEvents: 1, deadLetters: { "not-json": 3 } }),
  );
  await target.ingest.commitCheckpoint(checkpoint(30, 10));
  await target.ingest.claimPartition({ ...CLAIM, partition: 1, startOffset: 7 });
  await target.ingest.commitCheckpoint(checkpoint(7, 10, { partition: 1 }));

  const lease = (await target.evaluations.acquireLease("e", "a", 0, 1_000))!;
  const segments = await target.panes.segments("chill", 0);
  const body = (await mergedBody()) as Uint8Array;
  await target.evaluations.commit(
    commitOf(lease, {
      rollups: [
        rollup("temp", { events: 20, body }),
        rollup("temp", { level: "hour", events: 20, body }),
        ...["depot=north", "depot=south"].map((slice) => rollup("temp", { slice, body: mergedSlice() })),
      ],
      settledSegments: segments.map((one) => one.id),
    }),
  );
}

/** Twenty events, two of them missing: what the two `all` segments of pane 0 hold together. */
async function mergedBody(): Promise<Uint8Array> {
  return sketchBytes(18, 2);
}

function mergedSlice(): Uint8Array {
  return sketchBytes(8, 2);
}

/** Does to the file what no store method does, with a connection of its own. */
function tamper(...statements: string[]): void {
  const database = new DatabaseSync(path, { enableForeignKeyConstraints: false });
  for (const statement of statements) {
    const { changes } = database.prepare(statement).run();
    expect(changes, statement).toBeGreaterThan(0);
  }
  database.close();
}

async function findings(): Promise<readonly AuditFinding[]> {
  const report = await store.audit("chill");
  expect(report.clean).toBe(report.findings.length === 0);
  return report.findings;
}

async function sentences(): Promise<string[]> {
  return (await findings()).map((finding) => `${finding.invariant} ${finding.where}: ${finding.sentence}`);
}

describe("audit", () => {
  it("of a store that is as it was written finds nothing and adds up what it holds", async () => {
    expect(await store.audit()).toEqual({
      clean: true,
      findings: [],
      streams: [
        { stream: "chill", partitions: 2, checkpoints: 4, segments: 12, events: 40, deadLetters: 3, gaps: 1 },
      ],
    });
    expect((await store.audit("unknown")).clean).toBe(true);
  });

  it("finds nothing while segments wait for their rollup, be they new or late", async () => {
    await store.ingest.commitCheckpoint(checkpoint(40, 10, { segments: [segment("all", 10, 0)] }));
    expect(await sentences()).toEqual([]);
  });

  it("finds a deleted segment", async () => {
    tamper("DELETE FROM segment WHERE id = (SELECT max(id) FROM segment)");
    expect(await sentences()).toEqual([
      "1 parcels/1: checkpoint 7 to 16 was written with 3 segments, 2 are there",
      "2 parcels/1: checkpoint 7 to 16: the segments of depot hold 5 events, the checkpoint counted 10",
      "2 pane 1970-01-01T00:00:00.000Z, depot=south, temp: the rollup is wrong: it holds 10 (events), its segments hold 5",
    ]);
  });

  it("finds a deleted checkpoint, with its offsets", async () => {
    tamper("DELETE FROM segment WHERE set_id = 3", "DELETE FROM segment_set WHERE id = 3");
    const found = await sentences();
    expect(found).toContain("1 parcels/0: offsets 30 to 39 are covered by no checkpoint");
    expect(found).toContain("1 parcels/0: the partition says 30 (events), its checkpoints add up to 20");
  });

  it("finds the segments that a deleted checkpoint left", async () => {
    tamper("DELETE FROM segment_set WHERE id = 3");
    expect((await sentences()).filter((line) => line.includes("the checkpoint of this segment"))).toEqual([
      "1 segment 7: the checkpoint of this segment (all) is gone",
      "1 segment 8: the checkpoint of this segment (depot=north) is gone",
      "1 segment 9: the checkpoint of this segment (depot=south) is gone",
    ]);
  });

  it("finds a next offset that was moved, either way", async () => {
    tamper(`UPDATE "partition" SET next_offset = 50 WHERE "partition" = 0`);
    expect(await sentences()).toEqual(["1 parcels/0: offsets 40 to 49 are covered by no checkpoint"]);
    tamper(`UPDATE "partition" SET next_offset = 35 WHERE "partition" = 0`);
    expect(await sentences()).toEqual(["1 parcels/0: the next offset is 35, but checkpoints reach to 39"]);
  });

  it("finds a moved start offset", async () => {
    tamper(`UPDATE "partition" SET start_offset = 5 WHERE "partition" = 1`);
    expect(await sentences()).toEqual(["1 parcels/1: offsets 5 to 6 are covered by no checkpoint"]);
  });

  it("finds a checkpoint that overlaps another", async () => {
    tamper("UPDATE segment_set SET from_offset = 28 WHERE id = 3");
    expect(await sentences()).toEqual(["1 parcels/0: offsets 28 to 29 are covered by two checkpoints"]);
  });

  it("finds a partition whose row is gone", async () => {
    tamper(`DELETE FROM "partition" WHERE "partition" = 1`);
    expect(await sentences()).toEqual(["1 parcels/1: there are checkpoints but no partition"]);
  });

  it("finds a gap that was taken away or moved", async () => {
    tamper("UPDATE offset_gap SET from_offset = 5, to_offset = 10");
    expect(await sentences()).toEqual([
      "1 parcels/0: checkpoint 10 to 29: the gap 5 to 9 lies outside of it or over another gap",
    ]);
    tamper("DELETE FROM offset_gap");
    expect(await sentences()).toEqual([
      "1 parcels/0: checkpoint 10 to 29 was written with 1 gaps of 5 offsets, 0 of 0 are there",
    ]);
  });

  it("finds changed counts of events, late events and dead letters", async () => {
    tamper("UPDATE segment_set SET late_events = 2, dead_letter_events = 4 WHERE id = 2");
    expect(await sentences()).toEqual([
      "1 parcels/0: the partition says 1 (late), its checkpoints add up to 2",
      "1 parcels/0: the partition says 3 (dead), its checkpoints add up to 4",
    ]);
    tamper("UPDATE segment_set SET events = 16 WHERE id = 2");
    const found = await sentences();
    expect(found).toContain("1 parcels/0: checkpoint 10 to 29 counts 20 events in 15 offsets");
    expect(found).toContain(
      "2 parcels/0: checkpoint 10 to 29: the segments of all hold 10 events, the checkpoint counted 16",
    );
  });

  it("finds a segment whose events, slice or pane was changed", async () => {
    tamper("UPDATE segment SET events = 11 WHERE id = 7");
    expect(await sentences()).toEqual([
      "1 parcels/0: checkpoint 30 to 39: a segment was altered after it was written (the checksum does not match)",
      "2 parcels/0: checkpoint 30 to 39: the segments of all hold 11 events, the checkpoint counted 10",
      "2 pane 1970-01-01T00:03:00.000Z, all, segment 7, temp: it holds 10 events where there were 11",
    ]);
    for (const change of [
      "events = 10, slice = 'depot=north'",
      `slice = 'all', pane_start_ms = ${PANE_MS}`,
    ]) {
      tamper(`UPDATE segment SET ${change} WHERE id = 7`);
      expect((await sentences())[0]).toContain("a segment was altered after it was written");
    }
  });

  it("finds a flipped byte in a segment, and goes on to the rest", async () => {
    const [bytes] = (await store.panes.segments("chill", 3 * PANE_MS)).map((one) => one.body);
    const flipped = bytes!.slice();
    flipped[30]! ^= 1;
    tamper(`UPDATE segment SET body = x'${Buffer.from(flipped).toString("hex")}' WHERE id = 7`);
    tamper(`UPDATE "partition" SET next_offset = 50 WHERE "partition" = 0`);
    const found = await sentences();
    expect(found[0]).toBe("1 parcels/0: offsets 40 to 49 are covered by no checkpoint");
    expect(found[1]).toContain("segment 7: its bytes are not those that were written");
    expect(found[2]).toContain("segment 7: segment bytes cannot be read");
    expect(found).toHaveLength(3);
  });

  it("finds a segment put in another's place, whole as it is in itself", async () => {
    tamper("UPDATE segment SET body = (SELECT body FROM segment WHERE id = 8) WHERE id = 7");
    expect(await sentences()).toEqual([
      expect.stringContaining("its bytes are not those that were written"),
      "2 pane 1970-01-01T00:03:00.000Z, all, segment 7, temp: it holds 5 events where there were 10",
    ]);
  });

  it("finds a rollup that is gone, wrong, unreadable or of nothing", async () => {
    tamper("DELETE FROM rollup WHERE slice = 'depot=north'");
    expect(await sentences()).toEqual([
      "2 pane 1970-01-01T00:00:00.000Z, depot=north, temp: its segments are marked as rolled up, but there is no rollup",
    ]);
    tamper(
      `UPDATE rollup SET body = x'${Buffer.from(sketchBytes(9, 1)).toString("hex")}' WHERE level = 'pane' AND slice = 'all'`,
    );
    expect(await sentences()).toContain(
      "2 pane 1970-01-01T00:00:00.000Z, all, temp: the rollup is wrong: it holds 10 (events), its segments hold 20",
    );
    tamper("UPDATE rollup SET body = x'00' WHERE level = 'pane' AND slice = 'all'");
    expect((await findings()).map((finding) => finding.where)).toContain(
      "pane 1970-01-01T00:00:00.000Z, all, temp",
    );
    tamper(`UPDATE rollup SET start_ms = ${9 * PANE_MS} WHERE slice = 'depot=south'`);
    expect(await sentences()).toContain(
      "2 pane 1970-01-01T00:09:00.000Z, depot=south, temp: the rollup is wrong: it holds 10 (events), its segments hold 0",
    );
  });

  it("finds an hour that does not hold its panes", async () => {
    tamper("UPDATE rollup SET events = 19 WHERE level = 'hour'");
    expect(await sentences()).toEqual([
      "2 hour 1970-01-01T00:00:00.000Z, all, temp: the rollup holds 19 events, its panes hold 20",
    ]);
  });

  it("of a store broken everywhere names the first findings and counts the rest", async () => {
    for (let at = 40; at < 300; at++) {
      await store.ingest.commitCheckpoint(checkpoint(at, 1, { segments: [segment("all", 1, 0)] }));
    }
    tamper("UPDATE segment_set SET segment_checksum = 0 WHERE id > 4");
    const found = await findings();
    expect(found).toHaveLength(201);
    expect(found.at(-1)!.sentence).toBe("60 more findings are not listed");
  });
});
