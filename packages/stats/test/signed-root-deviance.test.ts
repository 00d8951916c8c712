import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { BAND_CRITICAL, shareRange } from "../src/deviance-band.js";
import { effectiveEvents } from "../src/effective-events.js";
import { signedRootDeviance } from "../src/signed-root-deviance.js";
import { PROPERTY } from "./kit/samples.js";

const open = fc.double({ min: 1e-4, max: 1 - 1e-4, noNaN: true });
const closed = fc.double({ min: 0, max: 1, noNaN: true });
const effective = fc.double({ min: 0, max: 1e7, noNaN: true });

describe("signedRootDeviance(observed, expected, effective)", () => {
  test.each([
    { g: 0.5, e: 0.5, m: 100, z: 0 },
    { g: 1, e: 0.5, m: 8, z: Math.sqrt(16 * Math.LN2) },
    { g: 0, e: 0.5, m: 8, z: -Math.sqrt(16 * Math.LN2) },
    { g: 0, e: 0.01, m: 100, z: -Math.sqrt(-200 * Math.log(0.99)) },
    { g: 0.3, e: 0.2, m: 0, z: 0 },
  ])("signedRootDeviance($g, $e, $m) is $z", ({ g, e, m, z }) => {
    expect(signedRootDeviance(g, e, m)).toBeCloseTo(z, 12);
  });

  test("signedRootDeviance has the sign of the difference, turns with the mirror and grows with √M", () => {
    fc.assert(
      fc.property(closed, open, effective, (g, e, m) => {
        const z = signedRootDeviance(g, e, m);
        expect(Number.isFinite(z)).toBe(true);
        if (g > e) expect(z).toBeGreaterThanOrEqual(0);
        if (g < e) expect(z).toBeLessThanOrEqual(0);
        expect(Math.abs(signedRootDeviance(1 - g, 1 - e, m) + z)).toBeLessThanOrEqual(
          1e-6 * (1 + Math.sqrt(m)),
        );
        expect(signedRootDeviance(g, e, 4 * m)).toBeCloseTo(2 * z, 6);
      }),
      PROPERTY,
    );
  });

  test("signedRootDeviance is near (g − e)/√(e(1 − e)/M) where the two shares are close", () => {
    expect(signedRootDeviance(0.51, 0.5, 10_000)).toBeCloseTo(2, 2);
  });

  test.each([
    [-0.1, 0.5, 1],
    [0.5, 0, 1],
    [0.5, 1, 1],
    [0.5, 0.5, -1],
    [Number.NaN, 0.5, 1],
  ])("signedRootDeviance(%d, %d, %d) is refused", (g, e, m) => {
    expect(() => signedRootDeviance(g, e, m)).toThrowError(
      expect.objectContaining({ code: "MOORLINE_INPUT_STATISTIC_DOMAIN" }),
    );
  });
});

describe("shareRange(rank, effective, critical)", () => {
  const criticals = fc.constantFrom(...Object.values(BAND_CRITICAL));

  test("shareRange ends where |z| reaches the critical value, or where there is no more share", () => {
    fc.assert(
      fc.property(open, fc.double({ min: 1, max: 1e7, noNaN: true }), criticals, (rank, m, critical) => {
        const { low, high } = shareRange(rank, m, critical);
        if (low > 0) expect(signedRootDeviance(low, rank, m)).toBeCloseTo(-critical, 5);
        else expect(signedRootDeviance(0, rank, m)).toBeGreaterThanOrEqual(-critical - 1e-9);
        if (high < 1) expect(signedRootDeviance(high, rank, m)).toBeCloseTo(critical, 5);
        else expect(signedRootDeviance(1, rank, m)).toBeLessThanOrEqual(critical + 1e-9);
        expect(low).toBeLessThan(rank);
        expect(high).toBeGreaterThan(rank);
      }),
      PROPERTY,
    );
  });

  test("shareRange without events is everything, and narrows as events come", () => {
    expect(shareRange(0.3, 0, 4.1)).toEqual({ low: 0, high: 1 });
    let width = 1;
    for (let m = 10; m < 1e9; m *= 10) {
      const { low, high } = shareRange(0.3, m, 4.1);
      expect(high - low).toBeLessThan(width);
      width = high - low;
    }
  });
});

describe("effectiveEvents(n, m, designEffect)", () => {
  test.each([
    { n: 100, m: 100, d: 1, expected: 50 },
    { n: 1e12, m: 500, d: 1, expected: 500 },
    { n: 100, m: 100, d: 5, expected: 10 },
    { n: 0, m: 100, d: 1, expected: 0 },
    { n: 100, m: 0, d: 1, expected: 0 },
  ])("effectiveEvents($n, $m, $d) is $expected", ({ n, m, d, expected }) => {
    expect(effectiveEvents(n, m, d)).toBeCloseTo(expected, 6);
  });
});
