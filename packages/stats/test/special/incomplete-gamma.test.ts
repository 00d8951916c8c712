import { describe, expect, test } from "vitest";
import { chiSquareExceededBy, chiSquareTail } from "../../src/special/chi-square.js";
import { gammaQuantile, gammaTails, gammaUpperQuantile } from "../../src/special/incomplete-gamma.js";
import { normalExceededBy, normalTail, normalTwoSided } from "../../src/special/normal.js";

// Live comparisons with R stand in test/oracle/chi-square.test.ts; here are the laws and the edges.

const SHAPES = [0.3, 0.5, 1, 3.7, 20, 500, 1e5, 1e6];

describe("gammaTails(a, x)", () => {
  test.each(SHAPES)("grows with x from 0 to 1 for shape %f, both tails together 1", (a) => {
    let last = 0;
    for (const z of [-5, -3, -1, 0, 1, 3, 5]) {
      const x = Math.max(0, a + z * Math.sqrt(a));
      const { lower, upper } = gammaTails(a, x);
      expect(lower).toBeGreaterThanOrEqual(last);
      expect(Math.abs(lower + upper - 1)).toBeLessThanOrEqual(2 * Number.EPSILON);
      last = lower;
    }
  });

  test("is 1 − e^(−x) for shape 1, on both sides of the switch between series and fraction", () => {
    for (const x of [1e-8, 0.5, 1.999, 2, 2.001, 30]) {
      expect(Math.abs(gammaTails(1, x).lower / -Math.expm1(-x) - 1)).toBeLessThan(1e-14);
      expect(Math.abs(gammaTails(1, x).upper / Math.exp(-x) - 1)).toBeLessThan(1e-13);
    }
  });

  test("keeps the far tails: e^(−600) for shape 1", () => {
    expect(Math.abs(gammaTails(1, 600).upper / Math.exp(-600) - 1)).toBeLessThan(1e-12);
  });

  test("has its edges at 0 and infinity", () => {
    expect(gammaTails(3, 0)).toEqual({ lower: 0, upper: 1 });
    expect(gammaTails(3, Number.POSITIVE_INFINITY)).toEqual({ lower: 1, upper: 0 });
  });
});

describe("gammaQuantile and gammaUpperQuantile", () => {
  test.each(SHAPES)("give back the probability for shape %f", (a) => {
    for (const p of [1e-12, 1e-4, 0.025, 0.3, 0.5]) {
      expect(Math.abs(gammaTails(a, gammaQuantile(p, a)).lower / p - 1)).toBeLessThan(1e-9);
      expect(Math.abs(gammaTails(a, gammaUpperQuantile(p, a)).upper / p - 1)).toBeLessThan(1e-9);
    }
  });

  test("have their edges at probability 0 and 1", () => {
    expect([gammaQuantile(0, 2), gammaQuantile(1, 2)]).toEqual([0, Number.POSITIVE_INFINITY]);
  });
});

describe("chiSquareTail and chiSquareExceededBy", () => {
  test("without degrees of freedom nothing can differ", () => {
    expect([chiSquareTail(0, 0), chiSquareTail(1, 0), chiSquareExceededBy(0.05, 0)]).toEqual([1, 0, 0]);
  });

  test("with two degrees of freedom is e^(−x/2)", () => {
    expect(chiSquareTail(9, 2)).toBeCloseTo(Math.exp(-4.5), 15);
    expect(chiSquareExceededBy(Math.exp(-4.5), 2)).toBeCloseTo(9, 12);
  });
});

describe("normalTail and normalExceededBy", () => {
  test("normalTail(z) + normalTail(−z) is 1 and the two-sided tail is twice the outer one", () => {
    for (const z of [0, 0.3, 1, 4, 9]) {
      expect(normalTail(z) + normalTail(-z)).toBeCloseTo(1, 15);
      expect(normalTwoSided(-z)).toBe(2 * normalTail(z));
    }
  });

  test("normalExceededBy gives the table's 1.6449, 1.9600, 2.5758, 3.2905", () => {
    const found = [0.05, 0.025, 0.005, 0.0005].map((p) => normalExceededBy(p).toFixed(4));
    expect(found).toEqual(["1.6449", "1.9600", "2.5758", "3.2905"]);
  });
});
