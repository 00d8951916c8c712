import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { ksDistance } from "../src/ks-distance.js";
import { kolmogorovTail, ksPValue, ksPValueAsymptotic } from "../src/ks-p-value.js";
import { ksPValueExact } from "../src/ks-p-value-exact.js";
import { bruteKsPValue } from "./kit/brute-force.js";
import { PROPERTY } from "./kit/samples.js";

const small = fc.array(fc.integer({ min: 0, max: 5 }), { minLength: 1, maxLength: 5 });
const untied = (n: number, m: number) =>
  [
    cdfOf(Array.from({ length: n }, (_, i) => i)),
    cdfOf(Array.from({ length: m }, (_, i) => i + 0.5)),
  ] as const;

describe("ksPValueExact(distance, baseline, production)", () => {
  test("ksPValueExact equals the share of all ways to deal the pooled values out, ties included", () => {
    fc.assert(
      fc.property(small, small, (a, b) => {
        const [f, g] = [cdfOf(a), cdfOf(b)];
        expect(ksPValueExact(ksDistance(f, g).distance, f, g)).toBeCloseTo(bruteKsPValue(a, b), 12);
      }),
      { ...PROPERTY, numRuns: 150 },
    );
  });

  test("ksPValueExact of disjoint samples is 2/C(n + m, n), however small", () => {
    const [f, g] = untied(30, 30);
    const paths = Array.from({ length: 30 }, (_, i) => (31 + i) / (i + 1)).reduce((x, y) => x * y, 1);
    expect(ksPValueExact(1, f, g) / (2 / paths)).toBeCloseTo(1, 11);
  });

  test("ksPValueExact of distance 0 is 1 and it falls as the distance grows", () => {
    const [f, g] = untied(9, 14);
    const ps = Array.from({ length: 127 }, (_, k) => ksPValueExact(k / 126, f, g));
    expect(ps[0]).toBe(1);
    for (let k = 1; k < ps.length; k += 1) expect(ps[k]).toBeLessThanOrEqual(ps[k - 1]!);
  });

  test("ksPValueExact refuses a sketch and an empty side", () => {
    const exact = cdfOf([1, 2]);
    expect(() => ksPValueExact(0.5, { ...exact, exact: false }, exact)).toThrowError(
      expect.objectContaining({ code: "MOORLINE_INPUT_STATISTIC_DOMAIN" }),
    );
    expect(() => ksPValueExact(0.5, cdfOf([]), exact)).toThrowError(
      expect.objectContaining({ code: "MOORLINE_INPUT_EMPTY_SAMPLE" }),
    );
  });
});

describe("ksPValue(input)", () => {
  test("ksPValue counts exactly up to n·m = 10,000 and takes the limit law beyond", () => {
    const at = untied(100, 100);
    const beyond = untied(100, 101);
    expect(ksPValue({ distance: 0.2, n: 100, m: 100, samples: at })).toBe(ksPValueExact(0.2, ...at));
    expect(ksPValue({ distance: 0.2, n: 100, m: 101, samples: beyond })).toBe(
      ksPValue({ distance: 0.2, n: 100, m: 101 }),
    );
  });

  test("ksPValue does not count where a sample is a sketch or events depend on each other", () => {
    const [f, g] = untied(20, 20);
    const limit = ksPValue({ distance: 0.4, n: 20, m: 20 });
    expect(ksPValue({ distance: 0.4, n: 20, m: 20, samples: [f, { ...g, exact: false }] })).toBe(limit);
    const dependent = ksPValue({ distance: 0.4, n: 20, m: 20, samples: [f, g], designEffect: 2 });
    expect(dependent).toBe(ksPValue({ distance: 0.4, n: 10, m: 10 }));
  });

  test("ksPValue by Stephens lies within .004 of the exact law at 60 against 80, the plain limit does not", () => {
    const [f, g] = untied(60, 80);
    const exact = ksPValueExact(0.23, f, g);
    expect(Math.abs(ksPValue({ distance: 0.23, n: 60, m: 80 }) - exact)).toBeLessThan(0.004);
    expect(Math.abs(ksPValueAsymptotic(0.23, 60, 80) - exact)).toBeGreaterThan(0.004);
  });

  test.each([
    { distance: 0, n: 1000, m: 1000, p: 1 },
    { distance: 1, n: 1e6, m: 1e6, p: 0 },
    { distance: 0.5, n: 0, m: 10, p: 1 },
  ])("ksPValue of $distance at $n and $m is $p", ({ p, ...input }) => {
    expect(ksPValue(input)).toBe(p);
  });

  test.each([-0.1, 1.1, Number.NaN])("ksPValue refuses distance %s", (distance) => {
    expect(() => ksPValue({ distance, n: 500, m: 500 })).toThrowError(
      expect.objectContaining({ code: "MOORLINE_INPUT_STATISTIC_DOMAIN" }),
    );
  });

  test.each([1.18, 1.3, 1.8, 3])("kolmogorovTail(%d) is the alternating series, term by term", (lambda) => {
    const term = (j: number) => Math.exp(-2 * j * j * lambda * lambda);
    const series = 2 * (term(1) - term(2) + term(3) - term(4) + term(5));
    expect(kolmogorovTail(lambda) / series).toBeCloseTo(1, 13);
  });

  test("kolmogorovTail falls from 1 to 0 without a step at the seam of its two series", () => {
    let previous = 1;
    for (let lambda = 0; lambda < 5; lambda += 0.01) {
      const tail = kolmogorovTail(lambda);
      expect(tail).toBeLessThanOrEqual(previous);
      expect(previous - tail).toBeLessThan(0.018);
      previous = tail;
    }
    expect(previous).toBeLessThan(1e-20);
  });
});
