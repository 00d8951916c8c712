import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { categoryName } from "../../src/categories/category-name.js";
import { CategorySketch } from "../../src/index.js";

// Laws that hold to the last event, against counting everything in a Map.

const PROPERTY = { seed: 20261201, numRuns: 400 } as const;
const LIMIT = 6;

const category = fc.oneof(
  fc.integer({ min: 0, max: 25 }).map(String),
  fc.string({ maxLength: 4 }),
  fc.constantFrom("__proto__", "constructor", "", "toString"),
);
const event = fc.record({
  name: fc.option(category, { nil: null, freq: 9 }),
  count: fc.integer({ min: 1, max: 5 }),
});
const events = fc.array(event, { maxLength: 60 });
const knowns = fc.constantFrom<readonly string[]>([], ["3", "__proto__"], ["1", "2", "3"], ["never"]);
const parts = fc.record({ events, known: knowns, limit: fc.constantFrom(LIMIT, LIMIT + 3, 1) });

type Part = typeof parts extends fc.Arbitrary<infer T> ? T : never;

function sketchOf({ events, known, limit }: Part): CategorySketch {
  const sketch = new CategorySketch({ known, limit });
  for (const { name, count } of events) {
    if (name === null) sketch.addMissing(count);
    else sketch.add(name, count);
  }
  return sketch;
}

/** Everything counted. */
function truthOf(all: readonly Part[]): Map<string, number> {
  const truth = new Map<string, number>();
  for (const { name, count } of all.flatMap((part) => part.events)) {
    if (name !== null) truth.set(categoryName(name), (truth.get(categoryName(name)) ?? 0) + count);
  }
  return truth;
}

describe("CategorySketch", () => {
  it("counts every kept category exactly, alone and after any merge, and every event once", () => {
    fc.assert(
      fc.property(fc.array(parts, { minLength: 1, maxLength: 5 }), (all) => {
        const merged = CategorySketch.merge(all.map(sketchOf));
        expect(merged.checkInvariants()).toEqual([]);
        const truth = truthOf(all);
        const { counts, events, missing, other } = merged.counts();
        let kept = 0;
        for (const [name, count] of counts) {
          expect([name, count]).toEqual([name, truth.get(name) ?? 0]);
          kept += count;
        }
        const total = all.flatMap((part) => part.events).reduce((sum, { count }) => sum + count, 0);
        expect(events).toBe(total);
        expect(kept + missing + other).toBe(total);
      }),
      PROPERTY,
    );
  });

  it("merging is associative and commutative to the byte", () => {
    fc.assert(
      fc.property(parts, parts, parts, (a, b, c) => {
        const [x, y, z] = [sketchOf(a), sketchOf(b), sketchOf(c)];
        const all = CategorySketch.merge([x, y, z]).encode();
        expect(CategorySketch.merge([CategorySketch.merge([x, y]), z]).encode()).toEqual(all);
        expect(CategorySketch.merge([x, CategorySketch.merge([y, z])]).encode()).toEqual(all);
        expect(CategorySketch.merge([z, x, y]).encode()).toEqual(all);
      }),
      PROPERTY,
    );
  });

  it("merging parts gives the bytes of one sketch that saw everything, in whatever order", () => {
    fc.assert(
      fc.property(fc.array(events, { minLength: 1, maxLength: 4 }), knowns, (lists, known) => {
        const part = (list: Part["events"]) => sketchOf({ events: list, known, limit: LIMIT });
        const whole = part(lists.flat()).encode();
        expect(part(lists.flat().toReversed()).encode()).toEqual(whole);
        if (lists.flat().length > 0) expect(CategorySketch.merge(lists.map(part)).encode()).toEqual(whole);
      }),
      PROPERTY,
    );
  });

  it("merging changes none of its parts, and an empty part changes nothing", () => {
    fc.assert(
      fc.property(parts, (part) => {
        const sketch = sketchOf(part);
        const before = sketch.encode();
        const merged = CategorySketch.merge([new CategorySketch({ limit: 1 }), sketch]);
        if (part.events.length > 0) expect(merged.encode()).toEqual(before);
        expect(sketch.encode()).toEqual(before);
      }),
      PROPERTY,
    );
  });

  it("what is written and read again is the same to the byte", () => {
    fc.assert(
      fc.property(parts, (part) => {
        const bytes = sketchOf(part).encode();
        const read = CategorySketch.decode(bytes);
        expect(read.encode()).toEqual(bytes);
        expect(read.checkInvariants()).toEqual([]);
        expect(read.counts()).toEqual(sketchOf(part).counts());
      }),
      PROPERTY,
    );
  });

  it("adding n at once is adding one n times", () => {
    fc.assert(
      fc.property(events, (list) => {
        const once = sketchOf({ events: list, known: ["3"], limit: LIMIT });
        const single = list.flatMap(({ name, count }) =>
          Array.from({ length: count }, () => ({ name, count: 1 })),
        );
        expect(sketchOf({ events: single, known: ["3"], limit: LIMIT }).encode()).toEqual(once.encode());
      }),
      PROPERTY,
    );
  });
});
