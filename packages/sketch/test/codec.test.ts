import { readdirSync, readFileSync } from "node:fs";
import { isMoorlineError } from "@moorline/errors";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { crc32 } from "../src/codec/crc32.js";
import { CHECKSUM_AT, HEADER_BYTES, LENGTH_AT, VERSION_AT } from "../src/codec/layout.js";
import { NumericSketch } from "../src/index.js";
import { SAMPLES, sampleOf } from "./support/samples.js";

const folder = new URL("./golden/", import.meta.url);
const golden: Record<string, Record<string, unknown>> = JSON.parse(
  readFileSync(new URL("golden.json", folder), "utf8"),
);
const names = readdirSync(folder).filter((name) => name.endsWith(".sketch"));

function bytesOf(file: string): Uint8Array {
  return new Uint8Array(readFileSync(new URL(file, folder)));
}

/** The category of the error that decoding ends with; "decoded" when it does not. */
function outcome(bytes: Uint8Array): string {
  try {
    NumericSketch.decode(bytes);
  } catch (error) {
    if (isMoorlineError(error)) return error.category;
    throw error;
  }
  return "decoded";
}

/** Makes length and checksum right again, as one would who forges a sketch. */
function forge(bytes: Uint8Array): Uint8Array {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  view.setUint32(LENGTH_AT, bytes.length, true);
  view.setUint32(CHECKSUM_AT, crc32(bytes, HEADER_BYTES, bytes.length, crc32(bytes, 0, CHECKSUM_AT)), true);
  return bytes;
}

describe("crc32(bytes)", () => {
  it("gives the check value of the CRC catalogue for 123456789", () => {
    expect(crc32(new TextEncoder().encode("123456789"), 0, 9)).toBe(0xcbf43926);
  });
});

describe("golden files", () => {
  it("are all described, and all descriptions have a file", () => {
    expect(names.map((name) => name.replace(".sketch", "")).toSorted()).toEqual(
      Object.keys(golden).toSorted(),
    );
  });

  it.each(names)("%s decodes to what was written, and encodes to the same bytes", (file) => {
    const bytes = bytesOf(file);
    const sketch = NumericSketch.decode(bytes);
    const expected = golden[file.replace(".sketch", "")]!;
    expect(sketch.encode()).toEqual(bytes);
    expect(sketch.checkInvariants()).toEqual([]);
    expect({
      bytes: bytes.length,
      counts: sketch.counts,
      min: sketch.min,
      max: sketch.max,
      sum: sketch.sum,
      exact: sketch.exact,
      compression: sketch.compression,
      thresholds: sketch.thresholdCounts(),
      atoms: sketch.atoms(),
      knots: sketch.toCdf().values.length,
      quantiles: (expected["quantiles"] as [number, number][]).map(([rank]) => [rank, sketch.quantile(rank)]),
    }).toEqual(expected);
  });

  it.each(names)("%s: every truncation is a FORMAT error", (file) => {
    const bytes = bytesOf(file);
    for (let length = 0; length < bytes.length; length++) {
      expect(outcome(bytes.subarray(0, length))).toBe("FORMAT");
    }
  });

  it.each(names)("%s: every flipped bit and every inverted byte is a FORMAT error", (file) => {
    const bytes = bytesOf(file);
    for (let at = 0; at < bytes.length; at++) {
      for (const flip of [1, 2, 4, 8, 16, 32, 64, 128, 255]) {
        bytes[at]! ^= flip;
        if (outcome(bytes) !== "FORMAT") expect.fail(`byte ${at} flipped by ${flip} is read`);
        bytes[at]! ^= flip;
      }
    }
    expect(outcome(bytes)).toBe("decoded");
  });

  it.each(names)("%s: bytes after the end are a FORMAT error, also under a right checksum", (file) => {
    const longer = new Uint8Array([...bytesOf(file), 0]);
    expect(outcome(longer)).toBe("FORMAT");
    expect(outcome(forge(longer))).toBe("FORMAT");
  });
});

describe("decode(bytes) of hostile bytes", () => {
  it("names the version that it cannot read", () => {
    const bytes = bytesOf("smooth-v1.sketch");
    bytes[VERSION_AT] = 9;
    expect(() => NumericSketch.decode(forge(bytes))).toThrow("version 9; this program reads up to 1");
  });

  it("under a right checksum gives a FORMAT error or a sketch that keeps every invariant", () => {
    const edits = fc.array(fc.tuple(fc.nat(4_000), fc.nat(255)), { minLength: 1, maxLength: 4 });
    fc.assert(
      fc.property(fc.constantFrom(...names), edits, (file, changes) => {
        const bytes = bytesOf(file);
        for (const [at, value] of changes) bytes[HEADER_BYTES + (at % (bytes.length - HEADER_BYTES))] = value;
        let sketch: NumericSketch;
        try {
          sketch = NumericSketch.decode(forge(bytes));
        } catch (error) {
          if (!isMoorlineError(error)) throw error;
          expect(error.category).toBe("FORMAT");
          return;
        }
        expect(sketch.checkInvariants()).toEqual([]);
        if (sketch.counts.finite === 0) return;
        for (const rank of [0, 0.3, 0.99, 1]) expect(Number.isFinite(sketch.quantile(rank))).toBe(true);
        expect(NumericSketch.decode(sketch.encode()).counts).toEqual(sketch.counts);
      }),
      { seed: 33, numRuns: 3_000 },
    );
  });

  it("random bytes under a right header and checksum are FORMAT errors", () => {
    fc.assert(
      fc.property(fc.uint8Array({ minLength: 0, maxLength: 400 }), (payload) => {
        const header = bytesOf("smooth-v1.sketch").subarray(0, HEADER_BYTES);
        expect(outcome(forge(new Uint8Array([...header, ...payload])))).toBe("FORMAT");
      }),
      { seed: 34, numRuns: 1_000 },
    );
  });

  it("a claim of 2^50 entries is refused before memory is taken", () => {
    const empty = new NumericSketch().encode();
    const claim = [0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0x03];
    const bytes = new Uint8Array([...empty.subarray(0, empty.length - 1), ...claim]);
    expect(outcome(forge(bytes))).toBe("FORMAT");
  });

  it("reads bytes that lie inside a larger buffer", () => {
    const bytes = bytesOf("kinds-v1.sketch");
    const wide = new Uint8Array(bytes.length + 9);
    wide.set(bytes, 5);
    expect(NumericSketch.decode(wide.subarray(5, 5 + bytes.length)).encode()).toEqual(bytes);
  });
});

describe("encode() and decode()", () => {
  it.each(Object.keys(SAMPLES))("on %s give back the same sketch to the bit", (name) => {
    for (const n of [1, 100, 3_000, 40_000]) {
      const sketch = new NumericSketch({ thresholds: { id: "é-1", values: [0, 1] }, knownAtoms: [0, 3] });
      sketch.addColumn(sampleOf(name, n, 6));
      const bytes = sketch.encode();
      const read = NumericSketch.decode(bytes);
      expect(read.encode()).toEqual(bytes);
      expect(read.counts).toEqual(sketch.counts);
      expect([read.min, read.max, read.sum, read.exact]).toEqual([
        sketch.min,
        sketch.max,
        sketch.sum,
        sketch.exact,
      ]);
      expect(read.thresholdCounts()).toEqual(sketch.thresholdCounts());
      expect(read.atoms()).toEqual(sketch.atoms());
      if (sketch.exact) expect(read.toCdf().upTo).toEqual(sketch.toCdf().upTo);
    }
  });

  it("a read sketch takes more values", () => {
    const sketch = NumericSketch.decode(bytesOf("smooth-v1.sketch"));
    sketch.addColumn(sampleOf("lognormal", 10_000, 2));
    expect(sketch.counts.finite).toBe(30_000);
    expect(sketch.checkInvariants()).toEqual([]);
  });

  it("small sketches take ten bytes a distinct value and less than 70 beside", () => {
    for (const n of [0, 1, 20, 300]) {
      const sketch = new NumericSketch();
      sketch.addColumn(sampleOf("normal", n, 1));
      expect(sketch.encode().length).toBeLessThan(10 * n + 70);
    }
  });
});
