import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { freezeThresholds } from "../src/freeze-thresholds.js";
import { numericSideOf } from "../src/numeric-side.js";
import { nearestTo, thresholdShares } from "../src/threshold-shares.js";
import { Random } from "./kit/random.js";
import { PROPERTY, samples } from "./kit/samples.js";

describe("thresholdShares(baseline, production)", () => {
  test("thresholdShares are the counted shares at or below the frozen values, the baseline's smoothed by half an event", () => {
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        const shares = thresholdShares(numericSideOf(a), numericSideOf(b));
        for (const [i, { rank, value }] of freezeThresholds(cdfOf(a)).entries()) {
          const share = shares[i]!;
          expect([share.rank, share.value]).toEqual([rank, value]);
          expect(share.expected).toBeCloseTo((a.filter((v) => v <= value).length + 0.5) / (a.length + 1), 14);
          expect(share.observed).toBeCloseTo(b.filter((v) => v <= value).length / b.length, 14);
          expect(share.events).toBe(b.filter((v) => v <= value).length);
          expect(Number.isFinite(share.z)).toBe(true);
        }
      }),
      PROPERTY,
    );
  });

  test("thresholdShares take kept counts over what the view says, for both sides", () => {
    const a = new Random(41).sample(5000);
    const b = new Random(42).sample(1000);
    const values = freezeThresholds(cdfOf(a)).map((t) => t.value);
    const counts = (sample: readonly number[]) => values.map((x) => sample.filter((v) => v <= x).length);
    const sketchOf = (sample: readonly number[]) => {
      const side = numericSideOf(sample);
      return { ...side, cdf: { ...side.cdf, exact: false, rankErrorAt: () => 0.01 } };
    };
    const counted = thresholdShares(
      { ...sketchOf(a), thresholdCounts: { id: "b1", values, counts: counts(a) } },
      { ...sketchOf(b), thresholdCounts: { id: "b1", values, counts: counts(b) } },
    );
    expect(counted).toEqual(thresholdShares(numericSideOf(a), numericSideOf(b)));
    expect(counted.every((s) => s.rankError === 0)).toBe(true);
  });

  test("thresholdShares ignore counts that were kept at other thresholds", () => {
    const a = numericSideOf(new Random(43).sample(500));
    const b = numericSideOf(new Random(44).sample(500));
    const values = Array.from({ length: 11 }, (_, i) => i + 0.123);
    const other = { id: "older", values, counts: values.map(() => 7) };
    expect(thresholdShares(a, { ...b, thresholdCounts: other })).toEqual(thresholdShares(a, b));
  });

  test("thresholdShares read from sketches prove only what their rank errors leave", () => {
    const a = numericSideOf(Array.from({ length: 1000 }, (_, i) => i));
    const b = numericSideOf(Array.from({ length: 1000 }, (_, i) => i + 30));
    const blurred = { ...b, cdf: { ...b.cdf, exact: false, rankErrorAt: () => 0.02 } };
    const middle = (shares: ReturnType<typeof thresholdShares>) => shares.find((s) => s.rank === 0.5)!;
    const sharp = middle(thresholdShares(a, b));
    const read = middle(thresholdShares(a, blurred));
    expect(read.observed).toBe(sharp.observed);
    expect(read.rankError).toBe(0.02);
    expect(Math.abs(read.z)).toBeLessThan(Math.abs(sharp.z) / 2);
    expect(read.z).toBeLessThan(0);
  });
});

describe("nearestTo(expected, observed, error)", () => {
  test.each([
    { expected: 0.5, observed: 0.52, error: 0.05, nearest: 0.5 },
    { expected: 0.5, observed: 0.6, error: 0.05, nearest: 0.55 },
    { expected: 0.5, observed: 0.4, error: 0.05, nearest: 0.45 },
    { expected: 0.5, observed: 0.4, error: 0, nearest: 0.4 },
  ])("nearestTo($expected, $observed, $error) is $nearest", ({ expected, observed, error, nearest }) => {
    expect(nearestTo(expected, observed, error)).toBeCloseTo(nearest, 14);
  });
});
