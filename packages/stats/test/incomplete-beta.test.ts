import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { clopperPearson } from "../src/clopper-pearson.js";
import { betaQuantile, incompleteBeta } from "../src/incomplete-beta.js";
import { PROPERTY } from "./kit/samples.js";

/** P(K ≥ k) of a binomial, summed term by term. */
function binomialUpperTail(k: number, n: number, p: number): number {
  let term = (1 - p) ** n;
  let below = 0;
  for (let i = 0; i < k; i += 1) {
    below += term;
    term *= ((n - i) / (i + 1)) * (p / (1 - p));
  }
  return 1 - below;
}

describe("incompleteBeta(x, a, b)", () => {
  test("incompleteBeta with whole shapes is a binomial tail: I_p(k, n − k + 1) = P(K ≥ k)", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 60 }),
        fc.integer({ min: 1, max: 60 }),
        fc.double({ min: 0.01, max: 0.99, noNaN: true }),
        (i, j, p) => {
          const [k, n] = [Math.min(i, j), Math.max(i, j)];
          expect(incompleteBeta(p, k, n - k + 1)).toBeCloseTo(binomialUpperTail(k, n, p), 11);
        },
      ),
      PROPERTY,
    );
  });

  test.each([
    { x: -1, expected: 0 },
    { x: 0, expected: 0 },
    { x: 1, expected: 1 },
    { x: 2, expected: 1 },
  ])("incompleteBeta($x, 2, 3) is $expected", ({ x, expected }) => {
    expect(incompleteBeta(x, 2, 3)).toBe(expected);
  });

  test.each([1, 30, 1e3, 1e5, 1e7])(
    "incompleteBeta(½, %d, the same) is ½: the fraction has terms enough",
    (a) => {
      expect(incompleteBeta(0.5, a, a)).toBeCloseTo(0.5, 9);
    },
  );

  test("incompleteBeta(x, 1, 1) is x and incompleteBeta(x, ½, ½) the arcsine law", () => {
    for (const x of [1e-9, 0.1, 0.5, 0.73, 1 - 1e-9]) {
      expect(incompleteBeta(x, 1, 1)).toBeCloseTo(x, 13);
      expect(incompleteBeta(x, 0.5, 0.5)).toBeCloseTo(
        (2 / Math.PI) * Math.atan2(Math.sqrt(x), Math.sqrt(1 - x)),
        13,
      );
    }
  });
});

describe("betaQuantile(probability, a, b)", () => {
  test("betaQuantile undoes incompleteBeta, from shapes of a half to a million", () => {
    const shape = fc.double({ min: Math.log(0.5), max: Math.log(1e6), noNaN: true }).map(Math.exp);
    fc.assert(
      fc.property(fc.double({ min: 1e-6, max: 1 - 1e-6, noNaN: true }), shape, shape, (p, a, b) => {
        expect(incompleteBeta(betaQuantile(p, a, b), a, b)).toBeCloseTo(p, 9);
      }),
      PROPERTY,
    );
  });

  test("betaQuantile(0) is 0 and betaQuantile(1) is 1", () => {
    expect([betaQuantile(0, 2, 3), betaQuantile(1, 2, 3)]).toEqual([0, 1]);
  });
});

describe("clopperPearson(events, trials)", () => {
  test("clopperPearson ends where the binomial tails are α/2", () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 40 }), fc.integer({ min: 1, max: 40 }), (i, n) => {
        const k = Math.min(i, n);
        const [low, high] = clopperPearson(k, n);
        if (k > 0) expect(binomialUpperTail(k, n, low)).toBeCloseTo(0.025, 9);
        else expect(low).toBe(0);
        if (k < n) expect(1 - binomialUpperTail(k + 1, n, high)).toBeCloseTo(0.025, 9);
        else expect(high).toBe(1);
        expect(low).toBeLessThanOrEqual(k / n);
        expect(high).toBeGreaterThanOrEqual(k / n);
      }),
      PROPERTY,
    );
  });

  test("clopperPearson of none in n has the closed form 1 − (α/2)^(1/n)", () => {
    expect(clopperPearson(0, 500)[1]).toBeCloseTo(1 - 0.025 ** (1 / 500), 13);
  });

  test("clopperPearson takes counts that are not whole, between its neighbours", () => {
    const [low, high] = clopperPearson(20.5, 1000);
    expect(low).toBeGreaterThan(clopperPearson(20, 1000)[0]);
    expect(low).toBeLessThan(clopperPearson(21, 1000)[0]);
    expect(high).toBeLessThan(clopperPearson(21, 1000)[1]);
  });

  test.each([
    [1, 0],
    [-1, 10],
    [11, 10],
    [Number.NaN, 10],
  ])("clopperPearson(%d, %d) is refused", (k, n) => {
    expect(() => clopperPearson(k, n)).toThrowError(
      expect.objectContaining({ code: "MOORLINE_INPUT_STATISTIC_DOMAIN" }),
    );
  });
});
