import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { countRange } from "../src/count-range.js";
import { shareRange } from "../src/deviance-band.js";
import { GRID_RANKS } from "../src/grid-ranks.js";
import { quantilePairs } from "../src/quantile-pairs.js";
import { bruteQuantile7 } from "./kit/brute-force.js";
import { Random } from "./kit/random.js";
import { PROPERTY, samples, slopingViews } from "./kit/samples.js";

const pairsOf = (a: readonly number[], b: readonly number[]) => quantilePairs(cdfOf(a), cdfOf(b));

describe("quantilePairs(baseline, production)", () => {
  test("quantilePairs gives the 29 ranks in order with the type 7 quantiles of both raw samples", () => {
    const random = new Random(21);
    const a = random.sample(1500);
    const b = random.sample(1200, (r) => 2 * r.normal() + 1);
    const pairs = pairsOf(a, b);
    expect(pairs.map((p) => p.rank)).toEqual(GRID_RANKS);
    for (const pair of pairs) {
      expect(pair.baseline).toBeCloseTo(bruteQuantile7(a, pair.rank), 12);
      expect(pair.production).toBeCloseTo(bruteQuantile7(b, pair.rank), 12);
      expect(pair).not.toHaveProperty("beyondData");
    }
  });

  test("quantilePairs takes the band's ends from the sorted raw values: Y(L) and Y(U + 1)", () => {
    const random = new Random(22);
    const a = random.sample(3000);
    const b = random.sample(900);
    const sorted = [...b].sort((x, y) => x - y);
    for (const pair of pairsOf(a, b)) {
      const { lowest, highest } = countRange(cdfOf(a), cdfOf(b), pair.rank, {
        confidence: 0.999,
        designEffect: 1,
      });
      expect(pair.low).toBe(lowest === 0 ? null : sorted[lowest - 1]);
      expect(pair.high).toBe(highest === 900 ? null : sorted[highest]);
    }
  });

  test("quantilePairs marks the ranks that n is too small for and gives null there, not a number", () => {
    const pairs = pairsOf(new Random(23).sample(5000), new Random(24).sample(40));
    const marked = pairs.filter((p) => p.beyondData).map((p) => p.rank);
    expect(marked).toEqual([0.001, 0.0025, 0.005, 0.01, 0.02, 0.98, 0.99, 0.995, 0.9975, 0.999]);
    for (const pair of pairs) {
      expect(pair.production === null).toBe(marked.includes(pair.rank));
      expect(pair.baseline).not.toBeNull();
    }
  });

  test("quantilePairs of 1,000 values reach .001 and .999", () => {
    const pairs = pairsOf(new Random(25).sample(1000), new Random(26).sample(1000));
    expect(pairs.filter((p) => p.beyondData)).toEqual([]);
  });

  test("quantilePairs of one value each is one pair in the middle at most, with an open band", () => {
    const pairs = pairsOf([3], [4]);
    expect(pairs.every((p) => p.beyondData && p.baseline === null && p.production === null)).toBe(true);
    expect(pairs.every((p) => p.low === null && p.high === null)).toBe(true);
  });

  test("quantilePairs keep the band around the production quantile and a sample within its own band", () => {
    fc.assert(
      fc.property(samples, (a) => {
        for (const pair of pairsOf(a, a)) {
          if (pair.low !== null && pair.production !== null) {
            expect(pair.low).toBeLessThanOrEqual(pair.production);
            expect(pair.low).toBeLessThanOrEqual(pair.baseline!);
          }
          if (pair.high !== null && pair.production !== null) {
            expect(pair.high).toBeGreaterThanOrEqual(pair.production);
            expect(pair.high).toBeGreaterThanOrEqual(pair.baseline!);
          }
        }
      }),
      PROPERTY,
    );
  });

  test("quantilePairs widen the band by the rank errors of both sides", () => {
    const a = cdfOf(new Random(27).sample(2000));
    const b = cdfOf(new Random(28).sample(2000));
    const sharp = quantilePairs(a, b);
    const blurred = quantilePairs({ ...a, rankErrorAt: () => 0.01 }, { ...b, rankErrorAt: () => 0.02 });
    const middle = (pairs: typeof sharp) => pairs.find((p) => p.rank === 0.5)!;
    const sorted = [...new Random(28).sample(2000)].sort((x, y) => x - y);
    const range = shareRange(0.5, 1000, 4.1);
    expect(middle(blurred).low).toBe(sorted[Math.ceil(2000 * (range.low - 0.03)) - 1]);
    expect(middle(blurred).high).toBe(sorted[Math.floor(2000 * (range.high + 0.03))]);
    expect(middle(sharp).low).toBeGreaterThan(middle(blurred).low!);
  });

  test("quantilePairs never give NaN, on sloping views neither, and never decrease along the ranks", () => {
    fc.assert(
      fc.property(slopingViews, slopingViews, (a, b) => {
        let previous = Number.NEGATIVE_INFINITY;
        for (const pair of quantilePairs(a, b)) {
          for (const x of [pair.baseline, pair.production, pair.low, pair.high]) {
            expect(x === null || Number.isFinite(x)).toBe(true);
          }
          if (pair.production === null) continue;
          expect(pair.production).toBeGreaterThanOrEqual(previous - 1e-9);
          previous = pair.production;
        }
      }),
      PROPERTY,
    );
  });

  test("quantilePairs at confidence .95 have a narrower band than at .999", () => {
    const a = cdfOf(new Random(29).sample(4000));
    const b = cdfOf(new Random(30).sample(4000));
    const width = (confidence: 0.95 | 0.999) => {
      const pair = quantilePairs(a, b, { ranks: [0.9], confidence })[0]!;
      return pair.high! - pair.low!;
    };
    expect(width(0.95)).toBeLessThan(width(0.999));
  });

  test("quantilePairs leave the 95 % band in 2 to 8 % of 600 draws when nothing changed", () => {
    const random = new Random(31);
    let left = 0;
    for (let draw = 0; draw < 600; draw += 1) {
      const a = cdfOf(random.sample(800, (r) => r.uniform()));
      const b = cdfOf(random.sample(400, (r) => r.uniform()));
      const outside = quantilePairs(a, b, { confidence: 0.95 }).some(
        (p) =>
          p.baseline !== null &&
          ((p.low !== null && p.baseline < p.low) || (p.high !== null && p.baseline > p.high)),
      );
      if (outside) left += 1;
    }
    expect(left / 600).toBeGreaterThan(0.02);
    expect(left / 600).toBeLessThan(0.08);
  });

  test("quantilePairs refuse a side without values", () => {
    expect(() => pairsOf([], [1])).toThrowError(
      expect.objectContaining({ code: "MOORLINE_INPUT_EMPTY_SAMPLE" }),
    );
  });
});
