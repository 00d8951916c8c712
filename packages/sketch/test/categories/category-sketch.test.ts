import { describe, expect, it } from "vitest";
import { categoryHash, categoryName, MOST_NAME_LENGTH } from "../../src/categories/category-name.js";
import { CategorySketch, DEFAULT_CATEGORY_LIMIT, MOST_CATEGORIES } from "../../src/index.js";

function sketchOf(names: Iterable<string>, options = {}): CategorySketch {
  const sketch = new CategorySketch(options);
  for (const name of names) sketch.add(name);
  return sketch;
}

const numbered = (count: number) => Array.from({ length: count }, (_, i) => `carrier ${i}`);

describe("CategorySketch", () => {
  it("is empty at first: known categories stand with 0", () => {
    const sketch = new CategorySketch({ known: ["b", "a"] });
    expect(sketch.counts()).toEqual({
      events: 0,
      missing: 0,
      counts: new Map([
        ["b", 0],
        ["a", 0],
      ]),
      other: 0,
    });
    expect(sketch.known()).toEqual(["a", "b"]);
    expect(sketch.distinct()).toBe(0);
    expect(sketch.checkInvariants()).toEqual([]);
  });

  it("keeps 1,000 categories by default and counts the rest in other", () => {
    const sketch = sketchOf([...numbered(3_000), ...numbered(3_000)]);
    const { counts, other, events } = sketch.counts();
    expect([counts.size, events]).toEqual([DEFAULT_CATEGORY_LIMIT, 6_000]);
    expect([...counts.values()].every((count) => count === 2)).toBe(true);
    expect(other).toBe(4_000);
    expect(sketch.checkInvariants()).toEqual([]);
  });

  it("counts known categories exactly however many others came before", () => {
    const sketch = sketchOf([...numbered(5_000), "north", "north"], { known: ["north"], limit: 10 });
    expect(sketch.counts().counts.get("north")).toBe(2);
    expect(sketch.counts().counts.size).toBe(11);
  });

  it.each([1_500, 10_000, 50_000])("distinct() of %i categories is within 10 %% with 1,000 kept", (count) => {
    const estimate = sketchOf(numbered(count)).distinct();
    expect(Math.abs(estimate / count - 1)).toBeLessThan(0.1);
  });

  it("distinct() is exact while nothing is in other", () => {
    expect(sketchOf(numbered(777), { known: ["carrier 5", "never"] }).distinct()).toBe(777);
  });

  it("treats hostile names as data", () => {
    const names = ["__proto__", "constructor", "hasOwnProperty", "", " ", "\u0000", "\u202eabc", "\n"];
    const { counts } = sketchOf(names).counts();
    expect([...counts.keys()].toSorted()).toEqual(names.toSorted());
    expect(({} as Record<string, unknown>)["north"]).toBeUndefined();
  });

  it("keeps of a name of 10,000 characters its beginning, length and hash, and tells two of them apart", () => {
    const names = [`${"x".repeat(9_999)}a`, `${"x".repeat(9_999)}b`, `${"x".repeat(9_999)}a`];
    const { counts } = sketchOf(names).counts();
    expect([...counts.values()]).toEqual([2, 1]);
    for (const name of counts.keys()) {
      expect(name.length).toBeLessThanOrEqual(MOST_NAME_LENGTH);
      expect(name.startsWith("xxxxx") && name.includes("(10000 characters, ")).toBe(true);
    }
  });

  it("its memory is bounded: 20,000 names of 5,000 characters encode to less than 250 kB", () => {
    const names = Array.from({ length: 20_000 }, (_, i) => `${i}${"y".repeat(5_000)}`);
    expect(sketchOf(names).encode().length).toBeLessThan(250_000);
  });

  it.each([0, -1, 1.5, MOST_CATEGORIES + 1, Number.NaN])("refuses a limit of %f", (limit) => {
    expect(() => new CategorySketch({ limit })).toThrow(`${limit} is not a number of categories`);
  });

  it("refuses more known categories than can be written", () => {
    expect(() => new CategorySketch({ known: numbered(MOST_CATEGORIES + 1) })).toThrow("50001 is not");
  });

  it.each([-1, 0.5, Number.NaN, 2 ** 53])("refuses to add %f events", (count) => {
    const sketch = sketchOf(["a"]);
    expect(() => sketch.add("a", count)).toThrow("is not a whole number from 0 to");
    expect(() => sketch.addMissing(count)).toThrow("is not a whole number from 0 to");
    expect(sketch.counts().events).toBe(1);
  });

  it("adding nothing of a category leaves no trace", () => {
    expect(sketchOf([]).encode()).toEqual(
      (() => {
        const sketch = new CategorySketch();
        sketch.add("ghost", 0);
        return sketch.encode();
      })(),
    );
  });

  it("merge of none is empty; a category that one part does not know competes with the others", () => {
    expect(CategorySketch.merge([]).counts().events).toBe(0);
    const merged = CategorySketch.merge([
      sketchOf(["north", ...numbered(50)], { known: ["north", "south"], limit: 5 }),
      sketchOf(["south", ...numbered(50)], { known: ["south"], limit: 8 }),
    ]);
    expect([merged.limit, merged.known()]).toEqual([5, ["south"]]);
    expect(merged.counts().counts.get("south")).toBe(1);
  });

  it("the distribution of kept categories does not depend on their names' order", () => {
    const kept = [...sketchOf(numbered(4_000), { limit: 400 }).counts().counts.keys()];
    const numbers = kept.map((name) => Number(name.slice(8))).toSorted((a, b) => a - b);
    const middle = numbers[200]!;
    expect(middle).toBeGreaterThan(1_700);
    expect(middle).toBeLessThan(2_300);
  });
});

describe("categoryName(category)", () => {
  it("of a name is itself, also where a long name is cut within a surrogate pair", () => {
    for (const raw of [
      "a",
      "\ud800",
      "a\udc00b",
      "😀".repeat(400),
      `${"x".repeat(119)}${"😀".repeat(200)}`,
    ]) {
      const name = categoryName(raw);
      expect(categoryName(name)).toBe(name);
      expect(new TextDecoder().decode(new TextEncoder().encode(name))).toBe(name);
    }
  });
});

describe("categoryHash(name)", () => {
  it("is what the format fixes for ever", () => {
    expect(["", "a", "north", "é", "__proto__"].map(categoryHash)).toEqual([
      8293447282621451, 1502839566283187, 5914641616199478, 1021573993043561, 5159066358369451,
    ]);
  });
});
