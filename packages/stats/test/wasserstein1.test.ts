import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { wasserstein1 } from "../src/wasserstein1.js";
import { bruteW1 } from "./kit/brute-force.js";
import { PROPERTY, samples, slopingViews } from "./kit/samples.js";

const w1 = (a: readonly number[], b: readonly number[]) => wasserstein1(cdfOf(a), cdfOf(b));
/** A few roundings of the size that the sums run through. */
const slackOf = (...numbers: readonly number[]) =>
  64 * Number.EPSILON * (1 + Math.max(...numbers.map(Math.abs)));

describe("wasserstein1(baseline, production)", () => {
  test.each([
    { a: [0], b: [0], expected: 0 },
    { a: [0], b: [3], expected: 3 },
    { a: [0, 1], b: [2, 3], expected: 2 },
    { a: [1, 1, 1], b: [1, 1, 4], expected: 1 },
    { a: [0, 0, 1], b: [0, 1, 1], expected: 1 / 3 },
    { a: [0, 10], b: [5], expected: 5 },
    { a: [-Number.MAX_VALUE], b: [Number.MAX_VALUE], expected: Number.MAX_VALUE },
  ])("wasserstein1($a, $b) is $expected", ({ a, b, expected }) => {
    expect(w1(a, b)).toBeCloseTo(expected, 12);
  });

  test("wasserstein1 equals the area between the two step functions, summed on raw values", () => {
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        expect(Math.abs(w1(a, b) - bruteW1(a, b))).toBeLessThanOrEqual(slackOf(...a, ...b));
      }),
      PROPERTY,
    );
  });

  test("wasserstein1 of equally long samples is the mean difference of their sorted values", () => {
    fc.assert(
      fc.property(samples, (a) => {
        const b = a.map((v, i) => v + (i % 3) - 1);
        const sorted = (xs: readonly number[]) => [...xs].sort((x, y) => x - y);
        const mean = sorted(a).reduce((sum, v, i) => sum + Math.abs(v - sorted(b)[i]!), 0) / a.length;
        expect(Math.abs(w1(a, b) - mean)).toBeLessThanOrEqual(slackOf(...a));
      }),
      PROPERTY,
    );
  });

  test("wasserstein1 is symmetric and 0 from a sample to itself", () => {
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        expect(w1(a, b)).toBe(w1(b, a));
        expect(w1(a, [...a].reverse())).toBe(0);
      }),
      PROPERTY,
    );
  });

  test("wasserstein1 of a sample shifted by c is |c|", () => {
    fc.assert(
      fc.property(samples, fc.integer({ min: -1000, max: 1000 }), (a, c) => {
        const shifted = a.map((v) => v + c);
        expect(Math.abs(w1(a, shifted) - Math.abs(c))).toBeLessThanOrEqual(slackOf(...a, c));
      }),
      PROPERTY,
    );
  });

  test("wasserstein1 grows with the scale of both samples, also through 0 and with the sign turned", () => {
    fc.assert(
      fc.property(samples, samples, fc.integer({ min: -50, max: 50 }), (a, b, s) => {
        const scaled = w1(
          a.map((v) => v * s),
          b.map((v) => v * s),
        );
        expect(Math.abs(scaled - Math.abs(s) * w1(a, b))).toBeLessThanOrEqual(
          slackOf(...a, ...b) * (1 + Math.abs(s)),
        );
      }),
      PROPERTY,
    );
  });

  test("wasserstein1 keeps the triangle inequality", () => {
    fc.assert(
      fc.property(samples, samples, samples, (a, b, c) => {
        expect(w1(a, c)).toBeLessThanOrEqual(w1(a, b) + w1(b, c) + slackOf(...a, ...b, ...c));
      }),
      PROPERTY,
    );
  });

  test("wasserstein1 over all ranks by quantile functions equals it by CDFs, on exact and on sloping views", () => {
    const views = fc.oneof(samples.map(cdfOf), slopingViews);
    fc.assert(
      fc.property(views, views, (a, b) => {
        const byCdf = wasserstein1(a, b);
        const byQuantile = wasserstein1(a, b, { from: 0, to: 1 });
        expect(Math.abs(byCdf - byQuantile)).toBeLessThanOrEqual(1e3 * slackOf(...a.values, ...b.values));
      }),
      PROPERTY,
    );
  });

  test("wasserstein1 over adjoining rank ranges adds up to the whole", () => {
    const views = fc.oneof(samples.map(cdfOf), slopingViews);
    fc.assert(
      fc.property(views, views, fc.double({ min: 0.01, max: 0.99, noNaN: true }), (a, b, cut) => {
        const parts = wasserstein1(a, b, { from: 0, to: cut }) + wasserstein1(a, b, { from: cut, to: 1 });
        expect(Math.abs(parts - wasserstein1(a, b))).toBeLessThanOrEqual(
          1e3 * slackOf(...a.values, ...b.values),
        );
      }),
      PROPERTY,
    );
  });

  test("wasserstein1 over the upper tail leaves out one record far beyond the range's end", () => {
    const base = Array.from({ length: 2000 }, (_, i) => i);
    const spiked = [...base.slice(0, -1), 1e9];
    expect(wasserstein1(cdfOf(base), cdfOf(spiked), { from: 0.95, to: 0.999 })).toBe(0);
    expect(w1(base, spiked)).toBeGreaterThan(1e5);
  });

  test("wasserstein1 refuses a side without values and a range that is none", () => {
    expect(() => w1([], [1])).toThrowError(expect.objectContaining({ code: "MOORLINE_INPUT_EMPTY_SAMPLE" }));
    expect(() => wasserstein1(cdfOf([1]), cdfOf([1]), { from: 0.9, to: 0.9 })).toThrowError(
      expect.objectContaining({ code: "MOORLINE_INPUT_STATISTIC_DOMAIN" }),
    );
  });
});
