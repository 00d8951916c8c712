import type { BlockCounts } from "@moorline/stats";
import { describe, expect, it } from "vitest";
import { BlockCounter } from "../src/block-counter.js";
import { decodeBlockCounts, encodeBlockCounts } from "../src/index.js";

const THRESHOLDS = [1, 2, 2, 5];

function sample(lengthMs: number | null = 60_000, startMs: number | null = 1_767_225_600_000): BlockCounts {
  const counter = new BlockCounter(3, THRESHOLDS);
  for (const value of [0, 1, 1.5, 2, 3, 9, null, Number.NaN, Number.NEGATIVE_INFINITY]) counter.add(0, value);
  // Enough for counts of more than one byte.
  for (let i = 0; i < 300; i += 1) counter.add(2, i % 7);
  return counter.counts(lengthMs, startMs);
}

const plain = ({ lengthMs, startMs, events, missing, finite, atOrBelow }: BlockCounts) => ({
  lengthMs,
  startMs,
  events: Array.from(events),
  missing: Array.from(missing),
  finite: Array.from(finite),
  atOrBelow: atOrBelow.map((hits) => Array.from(hits)),
});

describe("BlockCounter", () => {
  it("counts by kind and at or below each threshold, also where thresholds are equal, and leaves an empty block at zero", () => {
    const counts = plain(sample());
    expect(counts.events).toEqual([9, 0, 300]);
    expect(counts.missing).toEqual([1, 0, 0]);
    expect(counts.finite).toEqual([6, 0, 300]);
    const sevens = (most: number) =>
      Array.from({ length: 300 }, (_, i) => i % 7).filter((v) => v <= most).length;
    expect(counts.atOrBelow).toEqual([
      [2, 0, sevens(1)],
      [4, 0, sevens(2)],
      [4, 0, sevens(2)],
      [5, 0, sevens(5)],
    ]);
  });
});

describe("encodeBlockCounts, decodeBlockCounts", () => {
  it.each([
    ["by time", sample()],
    ["by rows", sample(null, null)],
    ["without thresholds", new BlockCounter(2, []).counts(60_000, 0)],
    ["of counts beyond 32 bits", { ...sample(), events: [2 ** 45, 0, 300] }],
  ])("gives back what was encoded: blocks %s", (_, counts) => {
    expect(plain(decodeBlockCounts(encodeBlockCounts(counts)))).toEqual(plain(counts));
  });

  it("has the bytes of the first version, which are read for ever", () => {
    expect(Buffer.from(encodeBlockCounts(new BlockCounter(1, [4]).counts(60_000, 0))).toString("hex")).toBe(
      "4d4c424301" +
        "26000000" +
        "00000000004ced40" +
        "0000000000000000" +
        "01000000" +
        "01" +
        "00000000" +
        "01ca3f62",
    );
  });

  it("refuses every cut and every changed byte", () => {
    const bytes = encodeBlockCounts(sample());
    for (let length = 0; length < bytes.length; length += 1)
      expect(() => decodeBlockCounts(bytes.subarray(0, length))).toThrow(/block counts .* cannot be read/);
    for (let at = 0; at < bytes.length; at += 1) {
      const changed = Uint8Array.from(bytes);
      changed[at]! ^= 0x10;
      expect(() => decodeBlockCounts(changed)).toThrow(/block counts .* cannot be read/);
    }
  });

  it("refuses counts that do not fit each other, though their checksum is right", () => {
    const counts = sample();
    const impossible = { ...counts, finite: [3, 0, 300] };
    expect(() => decodeBlockCounts(encodeBlockCounts(impossible))).toThrow(
      /block 0 counts more than it holds/,
    );
  });
});
