import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { countRange, EXACT_BELOW } from "../src/count-range.js";
import { shareRange } from "../src/deviance-band.js";
import { effectiveEvents } from "../src/effective-events.js";
import { logFactorial } from "../src/log-gamma.js";
import { PROPERTY } from "./kit/samples.js";

const LEVELS = { 0.95: 1.2723e-3, 0.99: 2.2156e-4, 0.999: 2.0658e-5 } as const;

function choose(n: number, k: number): number {
  let product = 1;
  for (let i = 1; i <= k; i += 1) product *= (n - k + i) / i;
  return product;
}

/** P(#{Y ≤ X(j)} ≤ k) for n baseline and m production values of one continuous law, term by term. */
function countAtMost(k: number, j: number, n: number, m: number): number {
  let sum = 0;
  for (let i = 0; i <= k; i += 1)
    sum += (choose(i + j - 1, i) * choose(m - i + n - j, m - i)) / choose(n + m, m);
  return sum;
}

/** Only the counts matter to the law, so a view of this many values is enough. */
const sized = (n: number) => ({ ...cdfOf([0]), n });
const rangeOf = (n: number, m: number, rank: number, confidence: keyof typeof LEVELS) =>
  countRange(sized(n), sized(m), rank, { confidence, designEffect: 1 });

describe("countRange(baseline, production, rank)", () => {
  // Small windows are summed in production's count, large ones in the baseline's.
  test.each([
    { name: "small", most: 60, ranks: [0.01, 0.05, 0.1, 0.25, 0.5] },
    { name: "large", most: 900, ranks: [0.3, 0.5] },
  ])(
    "countRange cuts the exact law of the count at its level, on both sides: $name windows",
    ({ most, ranks }) => {
      const size = fc.integer({ min: 1, max: 60 });
      const rank = fc.constantFrom(...ranks);
      fc.assert(
        fc.property(
          size,
          fc.integer({ min: most / 4, max: most }),
          rank,
          fc.constantFrom(0.95, 0.99, 0.999),
          (n, m, p, confidence) => {
            const level = LEVELS[confidence as keyof typeof LEVELS];
            const { lowest, highest } = rangeOf(n, m, p, confidence as keyof typeof LEVELS);
            const j = Math.floor((n - 1) * p) + 1;
            const next = Math.min(j + 1, n);
            if (lowest > 0) expect(countAtMost(lowest - 1, j, n, m)).toBeLessThanOrEqual(level * (1 + 1e-6));
            expect(countAtMost(lowest, j, n, m)).toBeGreaterThan(level * (1 - 1e-6));
            expect(1 - countAtMost(highest, next, n, m)).toBeLessThanOrEqual(level + 1e-11);
            if (highest > 0) expect(1 - countAtMost(highest - 1, next, n, m)).toBeGreaterThan(level - 1e-11);
          },
        ),
        PROPERTY,
      );
    },
  );

  test("countRange at a rank mirrors that at its complement", () => {
    for (const [n, m, rank] of [
      [40, 90, 0.01],
      [300, 120, 0.1],
      [5000, 700, 0.005],
    ] as const) {
      const low = rangeOf(n, m, rank, 0.999);
      expect(rangeOf(n, m, 1 - rank, 0.999)).toEqual({ lowest: m - low.highest, highest: m - low.lowest });
    }
  });

  test("countRange is no wider than the deviance form by more than 8 % of the width where the two meet", () => {
    for (const m of [200, 5000, 400_000]) {
      const n = 10_000;
      const rank = (EXACT_BELOW - 1) / n;
      const { lowest, highest } = rangeOf(n, m, rank, 0.999);
      const share = shareRange(rank, effectiveEvents(n, m), 4.1);
      const width = m * (share.high - share.low);
      expect(Math.abs(lowest - m * share.low)).toBeLessThan(0.08 * width + 1);
      expect(Math.abs(highest - m * share.high)).toBeLessThan(0.08 * width + 1);
    }
  });

  test("countRange with a design effect takes the deviance form with that many fewer events", () => {
    const share = shareRange(0.05, effectiveEvents(100, 1000, 4), 4.1);
    expect(countRange(sized(100), sized(1000), 0.05, { confidence: 0.999, designEffect: 4 })).toEqual({
      lowest: Math.ceil(1000 * share.low),
      highest: Math.floor(1000 * share.high),
    });
  });

  test("countRange of one value each says nothing: every count is consistent", () => {
    for (const rank of [0.001, 0.5, 0.999])
      expect(rangeOf(1, 1, rank, 0.999)).toEqual({ lowest: 0, highest: 1 });
  });
});

describe("logFactorial(k)", () => {
  test("logFactorial is the sum of the logarithms of 1 to k", () => {
    let sum = 0;
    expect(logFactorial(0)).toBe(0);
    for (let k = 1; k <= 3000; k += 1) {
      sum += Math.log(k);
      expect(Math.abs(logFactorial(k) - sum)).toBeLessThanOrEqual(1e-12 * Math.max(1, sum));
    }
  });

  test("logFactorial of one half is ln(√π/2)", () => {
    expect(logFactorial(0.5)).toBeCloseTo(Math.log(Math.sqrt(Math.PI) / 2), 13);
  });
});
