import { NumericSketch } from "@moorline/sketch";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { andersonDarling } from "../../src/anderson-darling/anderson-darling.js";
import { andersonDarlingTail, LIMIT_VARIANCE } from "../../src/anderson-darling/limit-law.js";
import { andersonDarlingVariance } from "../../src/anderson-darling/moments.js";
import { andersonDarlingStatistic } from "../../src/anderson-darling/statistic.js";
import { cdfOf } from "../../src/cdf-of.js";
import type { CdfView } from "../../src/cdf-view.js";
import { Random } from "../kit/random.js";
import { PROPERTY, samples, slopingViews } from "../kit/samples.js";
import { stepped } from "../kit/stepped-view.js";

/** Equations 6 and 7 of Scholz & Stephens 1987 on raw values, word for word. */
function bruteStatistic(groups: readonly (readonly number[])[], ties: "midrank" | "right"): number {
  const pooled = groups.flat();
  const total = pooled.length;
  const distinct = [...new Set(pooled)].sort((a, b) => a - b);
  let sum = 0;
  for (const group of groups) {
    for (const z of ties === "right" ? distinct.slice(0, -1) : distinct) {
      const l = pooled.filter((v) => v === z).length;
      const f = group.filter((v) => v === z).length;
      const half = ties === "right" ? 1 : 0.5;
      const b = pooled.filter((v) => v < z).length + half * l;
      const m = group.filter((v) => v < z).length + half * f;
      const variance = b * (total - b) - (ties === "right" ? 0 : (total * l) / 4);
      if (variance > 0) sum += ((l / total) * (total * m - group.length * b) ** 2) / variance / group.length;
    }
  }
  return ties === "right" ? sum : (sum * (total - 1)) / total;
}

/** The variance summed as the paper has it. */
function bruteVariance(sizes: readonly number[]): number {
  const k = sizes.length;
  const n = sizes.reduce((a, b) => a + b, 0);
  let h = 0;
  let g = 0;
  for (let i = 1; i < n; i += 1) h += 1 / i;
  for (let i = 1; i <= n - 2; i += 1) for (let j = i + 1; j < n; j += 1) g += 1 / ((n - i) * j);
  const inverse = sizes.reduce((sum, size) => sum + 1 / size, 0);
  const a = (4 * g - 6) * (k - 1) + (10 - 6 * g) * inverse;
  const b = (2 * g - 4) * k ** 2 + 8 * h * k + (2 * g - 14 * h - 4) * inverse - 8 * h + 4 * g - 6;
  const c = (6 * h + 2 * g - 2) * k ** 2 + (4 * h - 4 * g + 6) * k + (2 * h - 6) * inverse + 4 * h;
  const d = (2 * h + 6) * k ** 2 - 4 * h * k;
  return (a * n ** 3 + b * n ** 2 + c * n + d) / ((n - 1) * (n - 2) * (n - 3));
}

function sketchOf(values: readonly number[]): CdfView {
  const sketch = new NumericSketch();
  sketch.addColumn(Float64Array.from(values));
  return sketch.toCdf();
}

describe("andersonDarlingStatistic(views, ties)", () => {
  test("equals the two equations summed on raw values, with and without ties, for 2 and 3 samples", () => {
    fc.assert(
      fc.property(fc.array(samples, { minLength: 2, maxLength: 3 }), (groups) => {
        for (const ties of ["midrank", "right"] as const) {
          const expected = bruteStatistic(groups, ties);
          const actual = andersonDarlingStatistic(groups.map(cdfOf), ties);
          expect(Math.abs(actual - expected)).toBeLessThanOrEqual(1e-12 * Math.max(1, expected));
        }
      }),
      PROPERTY,
    );
  });

  test("is Pettitt's two-sample statistic where nothing is tied", () => {
    const random = new Random(8101);
    const x = random.sample(30);
    const y = random.sample(17);
    const pooled = [...x, ...y].sort((a, b) => a - b);
    let sum = 0;
    for (let i = 1; i < 47; i += 1) {
      const m = y.filter((v) => v <= pooled[i - 1]!).length;
      sum += (m * 47 - 17 * i) ** 2 / (i * (47 - i));
    }
    expect(andersonDarlingStatistic([cdfOf(x), cdfOf(y)], "right")).toBeCloseTo(sum / (30 * 17), 12);
  });

  test("does not depend on the order of the samples", () => {
    fc.assert(
      fc.property(slopingViews, slopingViews, (a, b) => {
        const forth = andersonDarlingStatistic([a, b]);
        expect(Math.abs(forth - andersonDarlingStatistic([b, a]))).toBeLessThanOrEqual(
          1e-9 * Math.max(1, forth),
        );
      }),
      PROPERTY,
    );
  });

  test("of piecewise-linear views is the limit of finer and finer steps", () => {
    fc.assert(
      fc.property(slopingViews, slopingViews, (a, b) => {
        const fine = andersonDarlingStatistic([stepped(a, 3000), stepped(b, 3000)]);
        const actual = andersonDarlingStatistic([a, b]);
        // Steps of 1/3000 of a sample stand for slopes; (N − 1)/N is that of the view's own N.
        expect(Math.abs(actual - fine)).toBeLessThanOrEqual(0.02 * Math.max(0.1, fine));
      }),
      { ...PROPERTY, numRuns: 60 },
    );
  });

  test("all values equal → 0; an empty side → INPUT error", () => {
    expect(andersonDarlingStatistic([cdfOf([3, 3, 3]), cdfOf([3])])).toBe(0);
    expect(() => andersonDarlingStatistic([cdfOf([1]), cdfOf([])])).toThrow(
      "the Anderson–Darling statistic needs at least one finite value on each side",
    );
  });
});

describe("andersonDarlingVariance(sizes)", () => {
  test.each([[[2, 2]], [[3, 5]], [[8, 8, 8, 8]], [[1, 40]], [[60, 7, 2]]])(
    "equals the paper's sums for sizes %j",
    (sizes) => {
      expect(andersonDarlingVariance(sizes)! / bruteVariance(sizes) - 1).toBeCloseTo(0, 11);
    },
  );

  test("tends to the variance of the limit law, 2(π² − 9)/3, and keeps its digits at 10⁹ events", () => {
    expect(andersonDarlingVariance([1e9, 1e9])).toBeCloseTo(LIMIT_VARIANCE, 7);
  });

  test("is null up to three events, whole or not", () => {
    expect(
      [
        [1, 1],
        [2, 1],
        [1.4, 1.5],
      ].map(andersonDarlingVariance),
    ).toEqual([null, null, null]);
  });
});

describe("andersonDarlingTail(x)", () => {
  test("falls from 1 to 0 without a step", () => {
    let last = 1;
    for (let x = 0.01; x < 12; x += 0.01) {
      const tail = andersonDarlingTail(x);
      expect(tail).toBeLessThanOrEqual(last + 1e-13);
      expect(last - tail).toBeLessThan(0.0105);
      last = tail;
    }
  });

  test("has mean 1 and variance 2(π² − 9)/3, integrated over the tail", () => {
    let mean = 0;
    let square = 0;
    for (let x = 0.0005; x < 40; x += 0.001) {
      mean += andersonDarlingTail(x) * 0.001;
      square += 2 * x * andersonDarlingTail(x) * 0.001;
    }
    expect(mean).toBeCloseTo(1, 7);
    expect(square - mean * mean).toBeCloseTo(LIMIT_VARIANCE, 6);
  });
});

describe("andersonDarling(baseline, production)", () => {
  test("its p-value is that of all ways to deal 7 and 8 values out, within .02", () => {
    const values = Array.from({ length: 15 }, (_, i) => i);
    const all: number[] = [];
    for (let mask = 0; mask < 1 << 15; mask += 1) {
      const first = values.filter((i) => (mask >> i) & 1);
      if (first.length !== 7) continue;
      const second = values.filter((i) => !((mask >> i) & 1));
      all.push(andersonDarlingStatistic([cdfOf(first), cdfOf(second)]));
    }
    all.sort((a, b) => b - a);
    for (const nominal of [0.5, 0.2, 0.1, 0.05, 0.02]) {
      const statistic = all[Math.floor(nominal * all.length)]!;
      const exact = all.filter((a) => a >= statistic - 1e-9).length / all.length;
      const variance = andersonDarlingVariance([7, 8])!;
      const p = andersonDarlingTail(1 + Math.sqrt(LIMIT_VARIANCE / variance) * (statistic - 1));
      expect(Math.abs(p - exact)).toBeLessThan(0.02);
    }
  });

  test.each([
    ["one value a side", [1], [2]],
    ["one against two", [1], [2, 3]],
    ["the same two values", [1, 2], [1, 2]],
    ["all equal", [5, 5, 5, 5], [5, 5]],
  ])("%s → p-value 1, for it shows nothing", (_, a, b) => {
    const result = andersonDarling(cdfOf(a), cdfOf(b));
    expect(result.pValue).toBe(1);
    expect(Number.isFinite(result.statistic)).toBe(true);
  });

  test("a design effect of 4 is a quarter of the events: same T within 2 %, from a quarter of the statistic", () => {
    const random = new Random(8102);
    const a = random.sample(4000);
    const b = random.sample(4000, (r) => r.normal() + 0.15);
    const plain = andersonDarling(cdfOf(a), cdfOf(b));
    const dependent = andersonDarling(cdfOf(a), cdfOf(b), { designEffect: 4 });
    expect(dependent.statistic).toBe(plain.statistic);
    expect(dependent.standardised / ((plain.statistic / 4 - 1) / Math.sqrt(LIMIT_VARIANCE))).toBeCloseTo(
      1,
      1,
    );
    expect(dependent.pValue).toBeGreaterThan(plain.pValue);
  });

  test("on compressed sketches the statistic is near the raw one, and the p-value errs upward", () => {
    const random = new Random(8103);
    const a = random.sample(20_000);
    const b = random.sample(5000, (r) => 1.2 * r.normal());
    const raw = andersonDarling(cdfOf(a), cdfOf(b));
    const sketched = andersonDarling(sketchOf(a), sketchOf(b));
    expect(sketched.statistic / raw.statistic).toBeGreaterThan(0.95);
    expect(sketched.statistic / raw.statistic).toBeLessThan(1.05);
    expect(sketched.pValue).toBeGreaterThanOrEqual(raw.pValue);
    expect(sketched.pValue).toBeLessThan(1e-3);
  });

  test("views of 10⁹ events give finite figures", () => {
    const heavy = (shift: number): CdfView => ({
      n: 1e9,
      values: Float64Array.of(0, 1, 2),
      below: Float64Array.of(0, 4e8 + shift, 1e9 - 1),
      upTo: Float64Array.of(1, 4e8 + shift + 10, 1e9),
      exact: false,
      rankErrorAt: () => 0,
    });
    const same = andersonDarling(heavy(0), heavy(0));
    expect(same.statistic).toBeLessThan(1e-6);
    const moved = andersonDarling(heavy(0), heavy(1e8));
    expect(Number.isFinite(moved.statistic) && moved.statistic > 1e6).toBe(true);
    expect(moved.pValue).toBe(0);
  });
});
