import { readFile } from "node:fs/promises";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { MALFORMED_EVENTS, MALFORMED_NOW_MS } from "../../../test/fixtures/malformed-events.js";
import { CollectorBench, parcel } from "./collected.js";

const table = MALFORMED_EVENTS.filter((event) => event.oneLine);
/** Offset by payload index; good events stand before, between and after. */
const offsets: number[] = [];

let bench: CollectorBench;
let metrics = "";
let letters: { offset: number; reason: string; payloadBytes: number; payloadBase64: string }[] = [];

beforeAll(async () => {
  bench = await CollectorBench.open();
  const lines: Uint8Array[] = [];
  let offset = 0;
  const put = (line: Uint8Array) => {
    lines.push(line);
    offset += line.length + 1;
  };
  put(Buffer.from(parcel(0)));
  table.forEach(({ payload }, i) => {
    offsets.push(offset);
    put(payload);
    put(Buffer.from(parcel(i + 1)));
  });
  const path = await bench.write("events.ndjson", lines);
  const running = await bench.readToEnd(bench.config(bench.fileStream([path])), {
    nowMs: () => MALFORMED_NOW_MS,
  });
  metrics = await running.telemetry.registry.metrics();
  const kept = await readFile(bench.path("dead-letters.ndjson"), "utf8");
  letters = kept
    .trim()
    .split("\n")
    .map((line) => JSON.parse(line));
});

afterAll(() => bench.close());

describe("a collector on malformed events", () => {
  it("startCollector() dead-letters every malformed event of the table and nothing else, in order", () => {
    expect(table.length).toBeGreaterThanOrEqual(40);
    expect(letters.map((letter) => letter.offset)).toEqual(offsets);
  });

  it.each(table.map((event, i) => ({ ...event, i })))(
    "dead letter for $title: $reason",
    ({ i, reason, payload }) => {
      const letter = letters[i];
      expect(letter).toMatchObject({ offset: offsets[i], reason });
      const kept = Buffer.from(letter!.payloadBase64, "base64");
      expect(kept.equals(payload.subarray(0, kept.length))).toBe(true);
      expect(kept.length).toBe(Math.min(payload.length, 512 * 1024));
    },
  );

  it("startCollector() counts the good events around them", async () => {
    expect(await bench.eventsCounted()).toBe(table.length + 1);
    expect((await bench.kinds("all", "cargo_temp"))?.finite).toBe(table.length + 1);
    expect((await bench.store.audit()).clean).toBe(true);
  });

  it("startCollector() counts them by reason, in the store and in the metrics", async () => {
    const expected = new Map<string, number>();
    for (const { reason } of table) expected.set(reason, (expected.get(reason) ?? 0) + 1);
    for (const [reason, count] of expected) {
      expect(metrics).toContain(
        `moorline_dead_letters_total{stream="chill-risk",reason="${reason}"} ${count}\n`,
      );
    }
    const [row] = await bench.store.ingest.partitions("chill-risk");
    expect(row?.deadLetters).toBe(table.length);
  });
});
