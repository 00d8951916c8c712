import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { eventsAt } from "../src/events-at.js";
import { quantileOf, valueAtEvents } from "../src/quantile-of.js";
import { bruteQuantile7 } from "./kit/brute-force.js";
import { PROPERTY, samples, slopingViews } from "./kit/samples.js";

const ranks = fc.double({ min: 0, max: 1, noNaN: true });

describe("quantileOf(view, rank)", () => {
  test.each([
    { sample: [5], rank: 0, expected: 5 },
    { sample: [5], rank: 1, expected: 5 },
    { sample: [1, 3], rank: 0.25, expected: 1.5 },
    { sample: [2, 2, 2], rank: 0.999, expected: 2 },
    { sample: [1, 2, 3, 4], rank: 0.5, expected: 2.5 },
    { sample: [1, 1, 1, 9], rank: 0.9, expected: 6.6 },
    { sample: [-Number.MAX_VALUE, Number.MAX_VALUE], rank: 0.5, expected: 0 },
  ])("quantileOf($sample, $rank) is $expected by type 7", ({ sample, rank, expected }) => {
    expect(quantileOf(cdfOf(sample), rank)).toBeCloseTo(expected, 12);
  });

  test("quantileOf agrees with type 7 on the sorted raw values", () => {
    fc.assert(
      fc.property(samples, ranks, (sample, rank) => {
        const expected = bruteQuantile7(sample, rank);
        // Two orders of the same operations: a few roundings of the values' size apart.
        const slack = 8 * Number.EPSILON * Math.max(...sample.map(Math.abs));
        expect(Math.abs(quantileOf(cdfOf(sample), rank) - expected)).toBeLessThanOrEqual(slack);
      }),
      PROPERTY,
    );
  });

  test("quantileOf never decreases as the rank grows, on exact and on sloping views", () => {
    const views = fc.oneof(samples.map(cdfOf), slopingViews);
    fc.assert(
      fc.property(views, ranks, ranks, (view, p, q) => {
        const low = quantileOf(view, Math.min(p, q));
        const high = quantileOf(view, Math.max(p, q));
        expect(high - low).toBeGreaterThanOrEqual(-1e-9);
      }),
      PROPERTY,
    );
  });

  test("quantileOf inverts the CDF of a sloping view: F(x−) ≤ rank ≤ F(x)", () => {
    fc.assert(
      fc.property(slopingViews, ranks, (view, rank) => {
        const x = quantileOf(view, rank);
        const slack = 1e-6 * view.n;
        expect(eventsAt(view, x).below).toBeLessThanOrEqual(rank * view.n + slack);
        expect(eventsAt(view, x).upTo).toBeGreaterThanOrEqual(rank * view.n - slack);
      }),
      PROPERTY,
    );
  });

  test("quantileOf refuses an empty view", () => {
    expect(() => quantileOf(cdfOf([]), 0.5)).toThrowError(
      expect.objectContaining({ code: "MOORLINE_INPUT_EMPTY_SAMPLE" }),
    );
  });

  test.each([-0.01, 1.01, Number.NaN])("quantileOf refuses rank %s", (rank) => {
    expect(() => quantileOf(cdfOf([1]), rank)).toThrowError(
      expect.objectContaining({ code: "MOORLINE_INPUT_RANK_RANGE" }),
    );
  });
});

describe("valueAtEvents(view, k)", () => {
  test("valueAtEvents is the k-th smallest value of an exact view", () => {
    fc.assert(
      fc.property(samples, (sample) => {
        const sorted = [...sample].sort((a, b) => a - b);
        const view = cdfOf(sample);
        for (const [i, x] of sorted.entries()) expect(valueAtEvents(view, i + 1)).toBe(x + 0);
      }),
      PROPERTY,
    );
  });
});
