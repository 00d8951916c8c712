import { mkdirSync, readFileSync, writeFileSync } from "node:fs";
import { crc32 } from "node:zlib";
import { MoorlineError } from "@moorline/errors";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { decodeSegmentBody, encodeSegmentBody } from "../src/index.js";

const GOLDEN = new URL("golden/segment-body-v1.bin", import.meta.url);

/** What the golden file holds. It was written once by version 1 and must be read for ever. */
const GOLDEN_SKETCHES: [string, Uint8Array][] = [
  ["cargo_temp", Uint8Array.from({ length: 40 }, (_, index) => (index * 37) & 0xff)],
  ["__proto__", Uint8Array.of(1, 2, 3)],
  ["", new Uint8Array(0)],
  ["é\u0000\u{1f9ca}\ud800", Uint8Array.of(255)],
];

/** `MOORLINE_WRITE_GOLDEN=1` writes the file anew: only for a new version of the format. */
if (process.env["MOORLINE_WRITE_GOLDEN"] === "1") {
  mkdirSync(new URL("golden/", import.meta.url), { recursive: true });
  writeFileSync(GOLDEN, encodeSegmentBody(GOLDEN_SKETCHES));
}
const golden = new Uint8Array(readFileSync(GOLDEN));

function refusal(bytes: Uint8Array): string {
  try {
    decodeSegmentBody(bytes);
  } catch (error) {
    expect(error).toBeInstanceOf(MoorlineError);
    return (error as MoorlineError).code;
  }
  return "was read";
}

/** The bytes with a right checksum: what lies behind it must hold out by itself. */
function resealed(bytes: Uint8Array): Uint8Array {
  const sealed = bytes.slice();
  new DataView(sealed.buffer).setUint32(sealed.length - 4, crc32(sealed.subarray(0, -4)), true);
  return sealed;
}

describe("segment body", () => {
  it("decodeSegmentBody reads the golden file of version 1", () => {
    expect([...decodeSegmentBody(golden)]).toEqual(GOLDEN_SKETCHES);
  });

  it("encodeSegmentBody still writes the golden file to the byte", () => {
    expect(encodeSegmentBody(GOLDEN_SKETCHES)).toEqual(golden);
  });

  it("decodeSegmentBody refuses every truncation and every lengthening", () => {
    for (let length = 0; length < golden.length; length++) {
      expect(refusal(golden.subarray(0, length))).toBe("MOORLINE_FORMAT_SEGMENT_BODY");
    }
    expect(refusal(Uint8Array.of(...golden, 0))).toBe("MOORLINE_FORMAT_SEGMENT_BODY");
  });

  it("decodeSegmentBody refuses every flipped bit", () => {
    for (let bit = 0; bit < golden.length * 8; bit++) {
      const flipped = golden.slice();
      flipped[bit >> 3]! ^= 1 << (bit & 7);
      expect(refusal(flipped)).toBe("MOORLINE_FORMAT_SEGMENT_BODY");
    }
  });

  it("decodeSegmentBody of any byte changed under a right checksum ends in a refusal or in whole sketches", () => {
    for (let at = 0; at < golden.length - 4; at++) {
      for (const value of [0, 1, 0x7f, 0xff]) {
        const changed = golden.slice();
        changed[at] = value;
        const code = refusal(resealed(changed));
        if (code !== "was read") expect(code).toBe("MOORLINE_FORMAT_SEGMENT_BODY");
        else expect(decodeSegmentBody(resealed(changed)).size).toBe(GOLDEN_SKETCHES.length);
      }
    }
  });

  it("decodeSegmentBody allocates nothing by a count or length that the bytes do not bear out", () => {
    const hostile = golden.slice();
    new DataView(hostile.buffer).setUint32(9, 0xffff_ffff, true);
    const before = process.memoryUsage().arrayBuffers;
    expect(refusal(resealed(hostile))).toBe("MOORLINE_FORMAT_SEGMENT_BODY");
    expect(process.memoryUsage().arrayBuffers - before).toBeLessThan(1_000_000);
  });

  it("decodeSegmentBody refuses a name in another than its written form", () => {
    const at = golden.findIndex((byte, index) => byte === 0xe2 && golden[index + 3] === 0x30);
    expect(at).toBeGreaterThan(0);
    const changed = golden.slice();
    changed[at + 3] = 0x39;
    expect(refusal(resealed(changed))).toBe("MOORLINE_FORMAT_SEGMENT_BODY");
  });

  it("decodeSegmentBody gives back what encodeSegmentBody took, for any names and bytes, in their order", () => {
    const name = fc.string({
      unit: fc.integer({ min: 0, max: 0xffff }).map((unit) => String.fromCharCode(unit)),
    });
    const sketches = fc.uniqueArray(fc.tuple(name, fc.uint8Array()), { selector: ([feature]) => feature });
    fc.assert(
      fc.property(sketches, (entries) => {
        expect([...decodeSegmentBody(encodeSegmentBody(entries))]).toEqual(entries);
      }),
      { seed: 7_460, numRuns: 300 },
    );
  });

  it("decodeSegmentBody reads a body that lies within a larger buffer", () => {
    const larger = new Uint8Array(golden.length + 20).fill(9);
    larger.set(golden, 10);
    expect([...decodeSegmentBody(larger.subarray(10, 10 + golden.length))]).toEqual(GOLDEN_SKETCHES);
  });

  it("encodeSegmentBody refuses a name that stands twice or is too long", () => {
    const empty = new Uint8Array(0);
    for (const entries of [
      [
        ["a", empty],
        ["a", empty],
      ],
      [["x".repeat(65_536), empty]],
    ] as [string, Uint8Array][][]) {
      expect(() => encodeSegmentBody(entries)).toThrow(
        expect.objectContaining({ code: "MOORLINE_INPUT_SEGMENT_BODY" }),
      );
    }
    expect([...decodeSegmentBody(encodeSegmentBody([["x".repeat(65_535), empty]])).keys()][0]).toHaveLength(
      65_535,
    );
  });
});
