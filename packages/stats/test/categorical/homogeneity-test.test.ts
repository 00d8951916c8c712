import { describe, expect, test } from "vitest";
import { alignCategories, type CategoryBin } from "../../src/categorical/align-categories.js";
import { homogeneityTest } from "../../src/categorical/homogeneity-test.js";
import { poolRare } from "../../src/categorical/pool-rare.js";
import { totalVariation } from "../../src/categorical/total-variation.js";
import { Random } from "../kit/random.js";

// Agreement with R's chisq.test stands in test/oracle/categories.test.ts.

const bin = (category: string | null, baseline: number, production: number): CategoryBin => ({
  category,
  baseline,
  production,
});

const side = (counts: Record<string, number>, other = 0) => {
  const map = new Map(Object.entries(counts));
  const values = [...map.values()].reduce((a, b) => a + b, other);
  return { events: values, missing: 0, counts: map, other };
};

describe("homogeneityTest(rows)", () => {
  test.each([
    ["no rows", []],
    ["one row", [[3, 4]]],
    ["one column", [[3], [9]]],
    [
      "all in one column",
      [
        [3, 0],
        [9, 0],
      ],
    ],
    [
      "one row with events",
      [
        [3, 4],
        [0, 0],
      ],
    ],
    [
      "nothing at all",
      [
        [0, 0],
        [0, 0],
      ],
    ],
  ])("%s → statistic 0, df 0, p-value 1", (_, rows) => {
    const nothing = { statistic: 0, df: 0, pValue: 1 };
    expect(homogeneityTest(rows)).toEqual({ g: nothing, chiSquare: nothing });
  });

  test("a column without events costs no degree of freedom", () => {
    expect(
      homogeneityTest([
        [10, 0, 5],
        [7, 0, 9],
      ]).g.df,
    ).toBe(1);
  });

  test("both statistics are divided by the design effect", () => {
    const plain = homogeneityTest([
      [50, 30, 20],
      [60, 20, 20],
    ]);
    const dependent = homogeneityTest(
      [
        [50, 30, 20],
        [60, 20, 20],
      ],
      2.5,
    );
    expect(dependent.g.statistic).toBeCloseTo(plain.g.statistic / 2.5, 12);
    expect(dependent.chiSquare.statistic).toBeCloseTo(plain.chiSquare.statistic / 2.5, 12);
    expect(dependent.g.pValue).toBeGreaterThan(plain.g.pValue);
  });

  test("proportional rows → G exactly 0 or a rounding above, never below", () => {
    const { g } = homogeneityTest([
      [1, 7, 33],
      [3, 21, 99],
    ]);
    expect(g.statistic).toBeGreaterThanOrEqual(0);
    expect(g.statistic).toBeLessThan(1e-12);
  });

  test("10⁹ events a side: small shifts are seen, proportional rows are not", () => {
    expect(
      homogeneityTest([
        [5e8, 5e8],
        [5e8, 5e8],
      ]).g.pValue,
    ).toBe(1);
    expect(
      homogeneityTest([
        [5e8, 5e8],
        [5.003e8, 4.997e8],
      ]).g.pValue,
    ).toBeLessThan(1e-9);
  });
});

describe("alignCategories(baseline, production)", () => {
  test("without other, an absent category came 0 times", () => {
    expect(alignCategories(side({ a: 3, b: 2 }), side({ b: 1, c: 4 }))).toEqual([
      bin("a", 3, 0),
      bin("b", 2, 1),
      bin("c", 0, 4),
    ]);
  });

  test("with other on a side, what it does not keep goes with other into one nameless bin", () => {
    expect(alignCategories(side({ a: 3, b: 2 }), side({ b: 1, c: 4 }, 9))).toEqual([
      bin("b", 2, 1),
      bin("c", 0, 4),
      bin(null, 3, 9),
    ]);
    expect(alignCategories(side({ a: 3, b: 2 }, 5), side({ b: 1, c: 4 }))).toEqual([
      bin("a", 3, 0),
      bin("b", 2, 1),
      bin(null, 5, 4),
    ]);
  });

  test("a known category with a kept 0 is told, other or not", () => {
    expect(alignCategories(side({ a: 3 }), side({ a: 0, c: 1 }, 2))).toEqual([
      bin("a", 3, 0),
      bin("c", 0, 1),
      bin(null, 0, 2),
    ]);
  });

  test("every event is in exactly one bin", () => {
    const bins = alignCategories(side({ a: 3, b: 2, z: 0 }, 7), side({ b: 1, c: 4, z: 0 }, 2));
    expect(bins.reduce((sum, { baseline }) => sum + baseline, 0)).toBe(12);
    expect(bins.reduce((sum, { production }) => sum + production, 0)).toBe(7);
  });
});

describe("poolRare(bins)", () => {
  test("keeps what expects five on both sides, pools the rest, keeps every event", () => {
    const bins = [bin("a", 900, 80), bin("b", 60, 12), bin("c", 20, 3), bin("d", 25, 5), bin(null, 5, 0)];
    expect(poolRare(bins)).toEqual([
      { baseline: 900, production: 80 },
      { baseline: 60, production: 12 },
      { baseline: 50, production: 8 },
    ]);
  });

  test("the smallest of the others joins a pool that is too small", () => {
    const bins = [bin("a", 100, 100), bin("b", 10, 12), bin("c", 1, 0)];
    expect(poolRare(bins)).toEqual([
      { baseline: 100, production: 100 },
      { baseline: 11, production: 12 },
    ]);
  });

  test.each([
    ["nothing", [], []],
    ["one bin", [bin("a", 3, 1)], [{ baseline: 3, production: 1 }]],
    ["only rare ones", [bin("a", 1, 0), bin("b", 0, 1)], [{ baseline: 1, production: 1 }]],
  ])("%s", (_, bins, expected) => {
    expect(poolRare(bins)).toEqual(expected);
  });

  test("a design effect asks for as many times the events", () => {
    const bins = [bin("a", 100, 100), bin("b", 12, 12), bin("c", 12, 12)];
    expect(poolRare(bins)).toHaveLength(3);
    expect(poolRare(bins, 3)).toHaveLength(2);
  });

  test("depends on the sums of both sides alone", () => {
    const exchanged = [bin("a", 100, 100), bin("b", 3, 9), bin("c", 9, 3), bin("d", 6, 6)];
    expect(poolRare(exchanged).map((pooled) => pooled.baseline + pooled.production)).toEqual([
      200, 12, 12, 12,
    ]);
  });
});

describe("totalVariation(bins)", () => {
  test("its noise is the mean distance of 400 draws without a change, within 6 %", () => {
    const random = new Random(8601);
    const shares = [0.4, 0.25, 0.15, 0.1, 0.06, 0.04];
    const upTo = [0.4, 0.65, 0.8, 0.9, 0.96, 1.01];
    const draw = (events: number) => {
      const counts = shares.map(() => 0);
      for (let i = 0; i < events; i += 1) {
        const u = random.uniform();
        counts[upTo.findIndex((limit) => u < limit)]! += 1;
      }
      return counts;
    };
    let distance = 0;
    let noise = 0;
    for (let i = 0; i < 400; i += 1) {
      const [a, b] = [draw(2000), draw(400)];
      const found = totalVariation(shares.map((_, c) => ({ baseline: a[c]!, production: b[c]! })));
      distance += found.distance;
      noise += found.noise;
    }
    expect(distance / noise).toBeGreaterThan(0.94);
    expect(distance / noise).toBeLessThan(1.06);
  });

  test("identical shares → 0, nothing in common → 1, never more", () => {
    const same = totalVariation([
      { baseline: 2, production: 4 },
      { baseline: 1, production: 2 },
    ]);
    expect([same.distance, same.beyondNoise]).toEqual([0, 0]);
    const apart = Array.from({ length: 30 }, (_, i) => ({
      baseline: i % 2 ? 7 : 0,
      production: i % 2 ? 0 : 3,
    }));
    expect(totalVariation(apart).distance).toBeCloseTo(1, 14);
    expect(totalVariation(apart).distance).toBeLessThanOrEqual(1);
  });
});
