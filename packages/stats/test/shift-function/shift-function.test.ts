import { describe, expect, test } from "vitest";
import { cdfOf } from "../../src/cdf-of.js";
import { quantilePairs } from "../../src/quantile-pairs.js";
import { shiftFunction } from "../../src/shift-function/shift-function.js";
import { Random } from "../kit/random.js";

const shiftOf = (a: readonly number[], b: readonly number[]) =>
  shiftFunction(quantilePairs(cdfOf(a), cdfOf(b)));

describe("shiftFunction(pairs)", () => {
  test("shiftFunction of values moved by 2 is 2 at every rank, and the band of the difference excludes 0 in the body", () => {
    const a = new Random(301).sample(3000);
    const points = shiftOf(
      a,
      a.map((v) => v + 2),
    );
    expect(points).toHaveLength(29);
    for (const point of points) expect(point.difference).toBeCloseTo(2, 12);
    const middle = points.find((point) => point.rank === 0.5)!;
    expect(middle.low).toBeGreaterThan(0);
    expect(middle.low).toBeLessThan(2);
    expect(middle.high).toBeGreaterThan(2);
  });

  test("shiftFunction of values doubled has ratio 2 wherever a quantile is not 0, also below 0", () => {
    const a = new Random(302).sample(2000);
    for (const { ratio } of shiftOf(
      a,
      a.map((v) => 2 * v),
    ))
      expect(ratio).toBeCloseTo(2, 12);
  });

  test("shiftFunction has no ratio where the signs differ or a quantile is 0, and still the difference", () => {
    const pair = { rank: 0.5, low: null, high: null };
    const points = shiftFunction([
      { ...pair, baseline: -1, production: 3 },
      { ...pair, baseline: 0, production: 3 },
      { ...pair, baseline: 3, production: 0 },
      { ...pair, baseline: -2, production: -5 },
    ]);
    expect(points.map((p) => p.ratio)).toEqual([null, null, null, 2.5]);
    expect(points.map((p) => p.difference)).toEqual([4, 3, -3, -3]);
  });

  test("shiftFunction carries the band of the pairs over: 0 outside it where the baseline's quantile is outside theirs", () => {
    const pairs = quantilePairs(
      cdfOf(new Random(303).sample(5000)),
      cdfOf(new Random(304).sample(2000, (r) => 1.3 * r.normal())),
    );
    const outside = pairs.map(
      ({ baseline: x, low, high }) => (low !== null && x! < low) || (high !== null && x! > high),
    );
    const shift = shiftFunction(pairs).map(
      ({ low, high }) => (low !== null && low > 0) || (high !== null && high < 0),
    );
    expect(shift).toEqual(outside);
    expect(shift.filter(Boolean).length).toBeGreaterThan(5);
  });

  test("shiftFunction leaves out what the data do not reach: null and marked, with n = 1, 2 and 40", () => {
    for (const m of [1, 2, 40]) {
      for (const point of shiftOf(new Random(305).sample(5000), new Random(306).sample(m))) {
        const beyond = m * Math.min(point.rank, 1 - point.rank) < 1 - 1e-9;
        expect(point.beyondData).toBe(beyond ? true : undefined);
        expect(point.difference === null).toBe(beyond);
        if (beyond) expect(point).toMatchObject({ ratio: null, low: null, high: null });
      }
    }
  });

  test("shiftFunction of the largest doubles is finite", () => {
    const huge = Number.MAX_VALUE;
    const points = shiftOf(
      Array.from({ length: 2000 }, () => -huge),
      Array.from({ length: 2000 }, () => huge),
    );
    for (const { difference, low, high } of points) expect([difference, low, high]).not.toContain(Infinity);
    expect(points[14]!.difference).toBe(huge);
    const factor = shiftFunction([{ rank: 0.5, baseline: 1e-300, production: 1e300, low: null, high: null }]);
    expect(factor[0]!.ratio).toBe(huge);
  });
});
