import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { compareNumeric } from "../src/compare-numeric.js";
import { compareVerdict } from "../src/decision/compare-verdict.js";
import { decide } from "../src/decision/decide.js";
import { ksDistance } from "../src/ks-distance.js";
import { numericSideOf } from "../src/numeric-side.js";
import { quantilePairs } from "../src/quantile-pairs.js";
import { wassersteinScale } from "../src/wasserstein-scale.js";
import { wasserstein1 } from "../src/wasserstein1.js";
import { assumedGround, judged } from "./kit/grounds.js";
import { Random } from "./kit/random.js";
import { PROPERTY, samples, slopingViews } from "./kit/samples.js";

const compare = (a: readonly (number | null)[], b: readonly (number | null)[]) =>
  compareNumeric(numericSideOf(a), numericSideOf(b));

/** Every number in a JSON-like value. */
function numbersIn(value: unknown): number[] {
  if (typeof value === "number") return [value];
  if (value === null || typeof value !== "object") return [];
  return Object.values(value).flatMap(numbersIn);
}

describe("compareNumeric(baseline, production)", () => {
  test("compareNumeric carries the statistics of the single functions", () => {
    const a = numericSideOf(new Random(71).sample(3000));
    const b = numericSideOf(new Random(72).sample(2000, (r) => r.normal() * 1.4));
    const result = compareNumeric(a, b);
    expect(result).toMatchObject({
      kind: "numeric",
      thin: false,
      reason: null,
      n: { baseline: 3000, production: 2000 },
      ks: ksDistance(a.cdf, b.cdf),
      pairs: quantilePairs(a.cdf, b.cdf),
      exactCounts: true,
    });
    expect(result.wasserstein).toEqual({
      distance: wasserstein1(a.cdf, b.cdf),
      scaled: wasserstein1(a.cdf, b.cdf) / wassersteinScale(a.cdf)!,
    });
    expect(result.tails).toMatchObject({ lower: { rank: 0.01 }, upper: { rank: 0.99 } });
    expect(result.shares).toHaveLength(11);
  });

  test("compareNumeric counts what is missing and what is not finite as fractions of all events", () => {
    const result = compare([1, 2, 3, null], [1, Number.NaN, Number.POSITIVE_INFINITY, null, 5]);
    expect(result).toMatchObject({
      n: { baseline: 3, production: 2 },
      events: { baseline: 4, production: 5 },
      missing: { baseline: 0.25, production: 0.2 },
      nonFinite: { baseline: 0, production: 0.4 },
    });
  });

  test.each([
    { name: "two empty sides", a: [], b: [], reason: "the baseline has no finite value" },
    { name: "an empty production", a: [1], b: [], reason: "production has no finite value" },
    {
      name: "a production of missing values",
      a: [1],
      b: [null, null],
      reason: "production has no finite value",
    },
    {
      name: "a baseline of infinities",
      a: [Number.NEGATIVE_INFINITY],
      b: [1],
      reason: "the baseline has no finite value",
    },
  ])("compareNumeric of $name is thin, says why and holds null", ({ a, b, reason }) => {
    const result = compare(a, b);
    expect(result).toMatchObject({
      thin: true,
      reason,
      ks: null,
      wasserstein: null,
      tails: null,
      psi: null,
      pairs: [],
    });
    expect(JSON.parse(JSON.stringify(result))).toEqual(result);
  });

  test.each([
    { name: "one value each", a: [1], b: [2] },
    { name: "two values each", a: [1, 2], b: [1, 3] },
    { name: "all equal on both sides", a: [4, 4, 4], b: [4, 4] },
    { name: "a constant baseline that moved", a: [4, 4, 4], b: [5, 5] },
    { name: "no inter-quartile range", a: [0, 0, 0, 0, 0, 0, 0, 9], b: [0, 0, 0, 0, 9, 9] },
    {
      name: "the greatest doubles",
      a: [-Number.MAX_VALUE, Number.MAX_VALUE],
      b: [Number.MAX_VALUE, Number.MIN_VALUE],
    },
  ])("compareNumeric of $name has finite numbers only", ({ a, b }) => {
    const result = compare(a, b);
    expect(result.thin).toBe(false);
    expect(numbersIn(result).filter((x) => !Number.isFinite(x))).toEqual([]);
  });

  test("compareNumeric of a constant baseline has a distance and no scaled one", () => {
    expect(compare([4, 4, 4], [5, 5]).wasserstein).toEqual({ distance: 1, scaled: null });
  });

  test("compareNumeric, compareVerdict and decide go through JSON unchanged for any two samples", () => {
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        const comparison = compare(a, b);
        const answers = [
          comparison,
          compareVerdict(comparison),
          decide(null, judged(comparison, null), assumedGround()),
        ];
        expect(JSON.parse(JSON.stringify(answers))).toEqual(answers);
        expect(numbersIn(answers).filter((x) => !Number.isFinite(x))).toEqual([]);
      }),
      PROPERTY,
    );
  });

  test("compareNumeric of sloping views is finite, and says that its counts are approximate", () => {
    fc.assert(
      fc.property(slopingViews, slopingViews, (a, b) => {
        const side = (cdf: typeof a) => ({ cdf, events: Math.ceil(cdf.n), missing: 0, nonFinite: 0 });
        const comparison = compareNumeric(side(a), side(b));
        expect(comparison.exactCounts).toBe(false);
        const answers = [
          comparison,
          compareVerdict(comparison),
          decide(null, judged(comparison, null), assumedGround()),
        ];
        expect(numbersIn(answers).filter((x) => !Number.isFinite(x))).toEqual([]);
      }),
      PROPERTY,
    );
  });

  test("compareNumeric takes off the p-value's distance what two sketches may be off by", () => {
    const a = numericSideOf(new Random(73).sample(4000));
    const b = numericSideOf(new Random(74).sample(4000, (r) => r.normal() + 0.1));
    const sharp = compareNumeric(a, b);
    const sketch = { ...b, cdf: { ...b.cdf, rankErrorAt: () => 0.02 } };
    const blurred = compareNumeric(a, sketch);
    expect(blurred.ks!.distance).toBe(sharp.ks!.distance);
    expect(blurred.ks!.pValue).toBeGreaterThan(10 * sharp.ks!.pValue);
  });

  test.each([
    { n: 5000, m: 5000, rank: 0.99 },
    { n: 499, m: 5000, rank: 0.95 },
    { n: 5000, m: 99, rank: 0.95 },
    { n: 60, m: 60, rank: 0.9 },
    { n: 20, m: 20, rank: 0.75 },
    { n: 19, m: 500, rank: null },
  ])("compareNumeric's tails at $n against $m values stand at rank $rank", ({ n, m, rank }) => {
    const ramp = (length: number) => Array.from({ length }, (_, i) => i / length);
    const { tails } = compare(ramp(n), ramp(m));
    expect(tails!.upper?.rank ?? null).toBe(rank);
    expect(tails!.lower?.rank ?? null).toBe(rank === null ? null : Number((1 - rank).toFixed(2)));
  });
});
