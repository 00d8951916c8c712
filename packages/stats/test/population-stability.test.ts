import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { decileBins } from "../src/decile-bins.js";
import { jensenShannonDistance, populationStabilityIndex } from "../src/population-stability.js";
import { Random } from "./kit/random.js";
import { PROPERTY, samples } from "./kit/samples.js";

const bins = (a: readonly number[], b: readonly number[]) => decileBins(cdfOf(a), cdfOf(b));
const ramp = (length: number) => Array.from({ length }, (_, i) => i + 1);

describe("decileBins(baseline, production)", () => {
  test("decileBins of a ramp are ten equal bins", () => {
    expect(bins(ramp(100), ramp(50)).map((b) => b.baseline)).toEqual(Array(10).fill(10));
    expect(bins(ramp(100), ramp(50)).map((b) => b.production)).toEqual([
      ...Array(5).fill(10),
      ...Array(5).fill(0),
    ]);
  });

  test("decileBins count every value once", () => {
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        const all = bins(a, b);
        expect(all.reduce((sum, bin) => sum + bin.baseline, 0)).toBe(a.length);
        expect(all.reduce((sum, bin) => sum + bin.production, 0)).toBe(b.length);
        expect(all.every((bin) => bin.baseline + bin.production > 0)).toBe(true);
      }),
      PROPERTY,
    );
  });

  test("decileBins give an atom at which deciles meet a bin of its own", () => {
    const zeros = Array.from({ length: 40 }, () => 0);
    const all = bins([...zeros, ...ramp(60)], [-5, 0, 0, 3]);
    expect(all.slice(0, 2)).toEqual([
      { baseline: 0, production: 1 },
      { baseline: 40, production: 2 },
    ]);
  });

  test("decileBins of a constant baseline are below, at and above", () => {
    expect(bins([7, 7, 7], [6, 7, 8, 9])).toEqual([
      { baseline: 0, production: 1 },
      { baseline: 3, production: 1 },
      { baseline: 0, production: 2 },
    ]);
  });
});

describe("populationStabilityIndex(bins)", () => {
  test("populationStabilityIndex of two bins follows the formula with half an event added to each", () => {
    const index = populationStabilityIndex([
      { baseline: 8, production: 2 },
      { baseline: 2, production: 8 },
    ]);
    expect(index).toBeCloseTo(2 * (8.5 / 11 - 2.5 / 11) * Math.log(8.5 / 2.5), 12);
  });

  test("populationStabilityIndex is 0 on equal counts and has the size that a shift of half a deviation gives", () => {
    expect(populationStabilityIndex(bins(ramp(100), ramp(100)))).toBe(0);
    const random = new Random(61);
    const a = random.sample(40_000);
    const b = random.sample(40_000, (r) => r.normal() + 0.5);
    // .238 on deciles of a normal distribution (docs/population-stability.md).
    expect(populationStabilityIndex(bins(a, b))).toBeGreaterThan(0.22);
    expect(populationStabilityIndex(bins(a, b))).toBeLessThan(0.26);
  });
});

describe("jensenShannonDistance(bins)", () => {
  test.each([
    { counts: [[5, 5]], expected: 0 },
    {
      counts: [
        [3, 6],
        [1, 2],
      ],
      expected: 0,
    },
    {
      counts: [
        [3, 0],
        [0, 9],
      ],
      expected: 1,
    },
    {
      counts: [
        [1, 1],
        [1, 0],
      ],
      expected: Math.sqrt(0.311278124459133),
    },
    { counts: [], expected: 0 },
  ])("jensenShannonDistance of $counts is $expected", ({ counts, expected }) => {
    const all = counts.map(([baseline, production]) => ({ baseline: baseline!, production: production! }));
    expect(jensenShannonDistance(all)).toBeCloseTo(expected, 12);
  });

  test("jensenShannonDistance lies in 0 to 1, also where a bin is empty on one side", () => {
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        const distance = jensenShannonDistance(bins(a, b));
        expect(distance).toBeGreaterThanOrEqual(0);
        expect(distance).toBeLessThanOrEqual(1);
      }),
      PROPERTY,
    );
  });
});
