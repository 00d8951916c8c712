import { readdirSync, readFileSync } from "node:fs";
import { isMoorlineError } from "@moorline/errors";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import {
  CHECKSUM_AT,
  HEADER_BYTES,
  LENGTH_AT,
  LIMIT_AT,
  RESERVED_AT,
  VERSION_AT,
} from "../../src/categories/category-layout.js";
import { crc32 } from "../../src/codec/crc32.js";
import { CategorySketch } from "../../src/index.js";

const folder = new URL("./golden/", import.meta.url);
const golden: Record<string, unknown> = JSON.parse(readFileSync(new URL("golden.json", folder), "utf8"));
const names = readdirSync(folder).filter((name) => name.endsWith(".categories"));

function bytesOf(file: string): Uint8Array {
  return new Uint8Array(readFileSync(new URL(file, folder)));
}

/** The category of the error that decoding ends with; "decoded" when it does not. */
function outcome(bytes: Uint8Array): string {
  try {
    CategorySketch.decode(bytes);
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

/** The payload after the header of an empty sketch with limit 5, under a right checksum. */
function forged(...payload: number[]): Uint8Array {
  return forge(
    new Uint8Array([...new CategorySketch({ limit: 5 }).encode().subarray(0, HEADER_BYTES), ...payload]),
  );
}

describe("golden files", () => {
  it("are all described, and all descriptions have a file", () => {
    expect(names.map((name) => name.replace(".categories", "")).toSorted()).toEqual(
      Object.keys(golden).toSorted(),
    );
  });

  it.each(names)("%s decodes to what was written, and encodes to the same bytes", (file) => {
    const bytes = bytesOf(file);
    const sketch = CategorySketch.decode(bytes);
    expect(sketch.encode()).toEqual(bytes);
    expect(sketch.checkInvariants()).toEqual([]);
    const { events, missing, counts, other } = sketch.counts();
    expect({
      bytes: bytes.length,
      events,
      missing,
      other,
      limit: sketch.limit,
      known: sketch.known(),
      distinct: sketch.distinct(),
      counts: [...counts].sort(([a], [b]) => (a < b ? -1 : 1)),
    }).toEqual(golden[file.replace(".categories", "")]);
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
    const bytes = bytesOf("full-v1.categories");
    bytes[VERSION_AT] = 9;
    expect(() => CategorySketch.decode(forge(bytes))).toThrow("version 9; this program reads up to 1");
  });

  const [a, b] = [0x61, 0x62];
  // After missing, other: known categories, then kept ones, each a length, a name, a count.
  const broken: readonly (readonly [string, number[]])[] = [
    ["names that do not ascend", [0, 0, 0, 2, 1, b, 1, 1, a, 1]],
    ["a name that comes twice", [0, 0, 0, 2, 1, a, 1, 1, a, 1]],
    ["a name both known and kept", [0, 0, 1, 1, a, 1, 1, 1, a, 1]],
    ["a kept category without an event", [0, 0, 0, 1, 1, a, 0]],
    ["a name that is not UTF-8", [0, 0, 0, 1, 1, 0xff, 1]],
    ["events in other while there is room", [0, 1, 0, 1, 1, a, 1]],
    [
      "more categories than the limit",
      [0, 0, 0, 6, 1, 65, 1, 1, 66, 1, 1, 67, 1, 1, 68, 1, 1, 69, 1, 1, 70, 1],
    ],
    [
      "counts that add up to too much",
      [...Array(7).fill(0xff), 0x0f, 1, 0, 5, 1, 65, 1, 1, 66, 1, 1, 67, 1, 1, 68, 1, 1, 69, 1],
    ],
    ["a claim of 2^50 categories", [0, 0, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0x03]],
    ["a claim of a name of 2^50 bytes", [0, 0, 0, 1, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0x03, a, 1]],
  ];
  it.each(broken)("%s is a FORMAT error under a right checksum", (_, payload) => {
    expect(outcome(forged(...payload))).toBe("FORMAT");
  });

  it("a name longer than names are kept is a FORMAT error", () => {
    const long = Array<number>(300).fill(a);
    expect(outcome(forged(0, 0, 0, 1, 0xac, 0x02, ...long, 1))).toBe("FORMAT");
    expect(outcome(forged(0, 0, 0, 1, 1, a, 1))).toBe("decoded");
  });

  it.each([
    ["a limit of 0", LIMIT_AT, 0],
    ["an unknown flag", RESERVED_AT, 1],
  ])("%s is a FORMAT error", (_, at, value) => {
    const bytes = new CategorySketch({ limit: 5 }).encode();
    bytes[at] = value;
    expect(outcome(forge(bytes))).toBe("FORMAT");
  });

  it("under a right checksum gives a FORMAT error or a sketch that keeps every invariant", () => {
    const edits = fc.array(fc.tuple(fc.nat(4_000), fc.nat(255)), { minLength: 1, maxLength: 4 });
    fc.assert(
      fc.property(fc.constantFrom(...names), edits, (file, changes) => {
        const bytes = bytesOf(file);
        for (const [at, value] of changes) bytes[HEADER_BYTES + (at % (bytes.length - HEADER_BYTES))] = value;
        let sketch: CategorySketch;
        try {
          sketch = CategorySketch.decode(forge(bytes));
        } catch (error) {
          if (!isMoorlineError(error)) throw error;
          expect(error.category).toBe("FORMAT");
          return;
        }
        expect(sketch.checkInvariants()).toEqual([]);
        expect(CategorySketch.decode(sketch.encode()).counts()).toEqual(sketch.counts());
      }),
      { seed: 35, numRuns: 3_000 },
    );
  });

  it("random bytes under a right header and checksum are read only where they keep every invariant", () => {
    fc.assert(
      fc.property(fc.uint8Array({ minLength: 0, maxLength: 60 }), (payload) => {
        const bytes = forged(...payload);
        if (outcome(bytes) === "decoded") expect(CategorySketch.decode(bytes).checkInvariants()).toEqual([]);
      }),
      { seed: 36, numRuns: 2_000 },
    );
  });

  it("reads bytes that lie inside a larger buffer", () => {
    const bytes = bytesOf("hostile-v1.categories");
    const wide = new Uint8Array(bytes.length + 9);
    wide.set(bytes, 5);
    expect(CategorySketch.decode(wide.subarray(5, 5 + bytes.length)).encode()).toEqual(bytes);
  });
});
