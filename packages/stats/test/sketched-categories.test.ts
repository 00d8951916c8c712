import { CategorySketch } from "@moorline/sketch";
import { describe, expect, test } from "vitest";
import { categoricalVerdict } from "../src/categorical/categorical-verdict.js";
import { categoryCountsOf } from "../src/categorical/category-counts.js";
import { compareCategories } from "../src/categorical/compare-categories.js";
import { Random } from "./kit/random.js";

// The comparison on the counts of real sketches against the same on all counts.

function sketched(values: readonly string[], known: readonly string[], limit: number): CategorySketch {
  const sketch = new CategorySketch({ known, limit });
  for (const value of values) sketch.add(value);
  return sketch;
}

/** Ranks of a long-tailed law: many common categories, some thousand rare ones. */
function draws(random: Random, length: number): string[] {
  return Array.from({ length }, () => `c${Math.floor(random.uniform() ** -0.9)}`);
}

describe("compareCategories of sketches", () => {
  test("equals that of all counts while nothing is in other", () => {
    const random = new Random(8701);
    const [a, b] = [draws(random, 3000), draws(random, 800)];
    const compared = compareCategories(sketched(a, [], 5000).counts(), sketched(b, ["c1"], 5000).counts());
    const truth = compareCategories(categoryCountsOf(a), categoryCountsOf(b));
    if (compared.thin || truth.thin) throw new Error("no values");
    expect(compared).toEqual({ ...truth, movers: expect.any(Array) });
    const byName = (list: typeof truth.movers) => list.toSorted((x, y) => (x.category < y.category ? -1 : 1));
    expect(byName(compared.movers)).toEqual(byName(truth.movers));
  });

  test("in bounded memory: known categories are exact, nothing that may lie in other is called new or vanished", () => {
    const random = new Random(8702);
    const [a, b] = [draws(random, 20_000), draws(random, 5000)];
    const truth = categoryCountsOf(a);
    const known = [...truth.counts]
      .toSorted(([, x], [, y]) => y - x)
      .slice(0, 40)
      .map(([name]) => name);
    const baseline = sketched(a, known, 20).counts();
    const parts = [b.slice(0, 2500), b.slice(2500)].map((part) => sketched(part, known, 20));
    const production = CategorySketch.merge(parts).counts();
    expect(production.other).toBeGreaterThan(0);
    const compared = compareCategories(baseline, production);
    const now = categoryCountsOf(b);
    for (const { category, baseline: before, production: after } of compared.movers) {
      expect(before).toBe((truth.counts.get(category) ?? 0) / 20_000);
      expect(after).toBe((now.counts.get(category) ?? 0) / 5000);
    }
    expect(compared.movers.length).toBeGreaterThanOrEqual(40);
    expect(compared).toMatchObject({ new: [], unseen: null });
    expect(categoricalVerdict(compared).state).toBe("holding");
  });

  test("a new category that takes the place of a known one is adrift through sketches too", () => {
    const random = new Random(8703);
    const a = Array.from({ length: 5000 }, () => (random.uniform() < 0.7 ? "north" : "south"));
    const b = Array.from({ length: 2000 }, () => (random.uniform() < 0.7 ? "north" : "sud"));
    const baseline = sketched(a, ["north", "south"], 100).counts();
    const compared = compareCategories(baseline, sketched(b, ["north", "south"], 100).counts());
    expect(compared.new.map(({ category }) => category)).toEqual(["sud"]);
    expect(compared.vanished.map(({ category }) => category)).toEqual(["south"]);
    expect(categoricalVerdict(compared).state).toBe("adrift");
  });
});
