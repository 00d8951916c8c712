import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { freezeThresholds } from "../src/freeze-thresholds.js";
import { FROZEN_RANKS, GRID_RANKS, partOfRank } from "../src/grid-ranks.js";

describe("GRID_RANKS and FROZEN_RANKS", () => {
  test("GRID_RANKS are the 29 ranks of the output contract, ascending and symmetric", () => {
    expect(GRID_RANKS).toEqual([
      0.001, 0.0025, 0.005, 0.01, 0.02, 0.03, 0.05, 0.075, 0.1, 0.15, 0.2, 0.25, 0.3, 0.4, 0.5, 0.6, 0.7,
      0.75, 0.8, 0.85, 0.9, 0.925, 0.95, 0.97, 0.98, 0.99, 0.995, 0.9975, 0.999,
    ]);
    const mirrored = [...GRID_RANKS].reverse().map((rank) => 1 - rank);
    for (const [i, rank] of GRID_RANKS.entries()) expect(mirrored[i]).toBeCloseTo(rank, 12);
  });

  test("every frozen rank is a rank of the grid", () => {
    expect(FROZEN_RANKS.filter((rank) => !GRID_RANKS.includes(rank))).toEqual([]);
    expect(FROZEN_RANKS).toHaveLength(11);
  });

  test("partOfRank calls below .1 the lower tail, above .9 the upper tail and the rest the body", () => {
    expect(FROZEN_RANKS.map(partOfRank)).toEqual([
      ...Array(3).fill("lower tail"),
      ...Array(5).fill("body"),
      ...Array(3).fill("upper tail"),
    ]);
  });
});

describe("freezeThresholds(view)", () => {
  test("freezeThresholds takes the type 7 quantiles at the frozen ranks", () => {
    const thresholds = freezeThresholds(cdfOf(Array.from({ length: 1001 }, (_, i) => i)));
    const values = thresholds.map((t) => Number(t.value.toFixed(9)));
    expect(values).toEqual([1, 10, 50, 100, 250, 500, 750, 900, 950, 990, 999]);
    expect(thresholds.map((t) => t.rank)).toEqual(FROZEN_RANKS);
  });

  test("freezeThresholds of an empty baseline is an empty list", () => {
    expect(freezeThresholds(cdfOf([]))).toEqual([]);
  });
});
