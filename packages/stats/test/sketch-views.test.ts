import { NumericSketch } from "@moorline/sketch";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { compareNumeric } from "../src/compare-numeric.js";
import { freezeThresholds } from "../src/freeze-thresholds.js";
import { type NumericSide, numericSideOf } from "../src/numeric-side.js";
import { bruteW1 } from "./kit/brute-force.js";
import { Random } from "./kit/random.js";

// The statistics on real sketches against the same statistics on the raw values: equal while a sketch is exact, within its
// measured rank error once it compresses. How the sketch itself is measured stands in packages/sketch/docs.

function sketched(
  values: readonly number[],
  thresholds?: { readonly id: string; readonly values: readonly number[] },
): NumericSide {
  const sketch = new NumericSketch(thresholds === undefined ? {} : { thresholds });
  sketch.addColumn(Float64Array.from(values));
  const cdf = sketch.toCdf();
  return { cdf, events: values.length, missing: 0, nonFinite: 0, thresholdCounts: sketch.thresholdCounts() };
}

describe("statistics of sketches", () => {
  test("compareNumeric of exact sketches equals that of the raw values in every figure", () => {
    const random = new Random(91);
    const a = random.sample(300, (r) => Math.round(10 * r.normal()) / 10);
    const b = random.sample(200);
    expect(sketched(a).cdf.exact).toBe(true);
    expect(compareNumeric(sketched(a), sketched(b))).toEqual(
      compareNumeric(numericSideOf(a), numericSideOf(b)),
    );
  });

  test.each([
    { name: "normal", draw: (r: Random) => r.normal() },
    { name: "lognormal", draw: (r: Random) => Math.exp(1.5 * r.normal()) },
    { name: "70 % zeros", draw: (r: Random) => (r.uniform() < 0.7 ? 0 : r.normal()) },
  ])(
    "compareNumeric of compressed sketches is within their rank errors of the raw values: $name",
    ({ draw }) => {
      const random = new Random(92);
      const a = random.sample(60_000, draw);
      const b = random.sample(20_000, (r) => 1.15 * draw(r) + 0.05);
      const [left, right] = [sketched(a), sketched(b)];
      expect(right.cdf.exact).toBe(false);
      const read = compareNumeric(left, right);
      const truth = compareNumeric(numericSideOf(a), numericSideOf(b));
      const error = left.cdf.rankErrorAt(0.5) + right.cdf.rankErrorAt(0.5);
      expect(error).toBeLessThan(0.02);
      expect(Math.abs(read.ks!.distance - truth.ks!.distance)).toBeLessThanOrEqual(error);
      expect(read.wasserstein!.distance / truth.wasserstein!.distance).toBeGreaterThan(0.9);
      expect(read.wasserstein!.distance / truth.wasserstein!.distance).toBeLessThan(1.1);
    },
  );

  test("compareNumeric reads shares from threshold counts: no sketch error where they were kept", () => {
    const random = new Random(93);
    const a = random.sample(50_000);
    const b = random.sample(20_000, (r) => 1.2 * r.normal());
    const baseline = numericSideOf(a);
    const values = freezeThresholds(baseline.cdf).map((t) => t.value);
    const read = compareNumeric(baseline, sketched(b, { id: "b1", values }));
    const truth = compareNumeric(baseline, numericSideOf(b));
    expect(read.exactCounts).toBe(true);
    expect(read.shares).toEqual(truth.shares);
    expect(read.tails!.upper).toEqual(truth.tails!.upper);
    expect(compareNumeric(baseline, sketched(b)).exactCounts).toBe(false);
  });

  test("wasserstein1 of exact sketches of few values equals brute force", () => {
    const a = [1, 1, 2, 5, 5, 5];
    const b = [0, 1, 5, 9];
    const comparison = compareNumeric(sketched(a), sketched(b));
    expect(comparison.wasserstein!.distance).toBeCloseTo(bruteW1(a, b), 14);
    expect([...sketched(a).cdf.upTo]).toEqual([...cdfOf(a).upTo]);
  });
});
