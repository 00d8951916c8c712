import { describe, expect, test } from "vitest";
import { compareNumeric } from "../src/compare-numeric.js";
import { designEffectAt } from "../src/design-effect.js";
import { ksPValue } from "../src/ks-p-value.js";
import { numericSideOf } from "../src/numeric-side.js";
import { quantilePairs } from "../src/quantile-pairs.js";
import { Random } from "./kit/random.js";

const [a, b] = [numericSideOf(new Random(331).sample(8000)), numericSideOf(new Random(332).sample(4000))];

describe("designEffectAt(effect, rank)", () => {
  test("designEffectAt is 1 by default, the figure, or the figure of the rank, and never below 1", () => {
    expect(designEffectAt(undefined, 0.5)).toBe(1);
    expect(designEffectAt(4, 0.5)).toBe(4);
    expect(designEffectAt((rank) => 10 * rank, 0.5)).toBe(5);
    expect(designEffectAt(() => 0.3, 0.5)).toBe(1);
  });
});

describe("a design effect by rank", () => {
  test("compareNumeric takes it for the band, rank by rank", () => {
    const effect = (rank: number) => (rank === 0.5 ? 9 : 1);
    const plain = compareNumeric(a, b).pairs;
    const given = compareNumeric(a, b, { designEffect: effect }).pairs;
    expect(given).toEqual(quantilePairs(a.cdf, b.cdf, { designEffect: effect }));
    const width = (pairs: typeof plain) => pairs[14]!.high! - pairs[14]!.low!;
    expect(width(given) / width(plain)).toBeGreaterThan(2.5);
    expect(width(given) / width(plain)).toBeLessThan(3.5);
    expect(given.filter((_, i) => i !== 14)).toEqual(plain.filter((_, i) => i !== 14));
  });

  test("compareNumeric takes the largest effect of the body for the KS p-value", () => {
    const found = compareNumeric(a, b, {
      designEffect: (rank) => (rank === 0.25 ? 5 : rank < 0.1 ? 99 : 2),
    });
    expect(found.ks!.pValue).toBe(
      ksPValue({ distance: found.ks!.distance, n: 8000, m: 4000, designEffect: 5 }),
    );
  });

  test("compareNumeric takes it for the tail intervals, headline and ranks", () => {
    const plain = compareNumeric(a, b).tails!.upper!.interval;
    const found = compareNumeric(a, b, { designEffect: 9 });
    expect(found.tails!.upper!.interval[1] - found.tails!.upper!.interval[0]).toBeGreaterThan(
      2 * (plain[1] - plain[0]),
    );
    expect(found.tailRanks!.upper[1]!.interval).toEqual(found.tails!.upper!.interval);
  });
});
