import { NumericSketch } from "@moorline/sketch";
import { describe, expect, test } from "vitest";
import { readPattern } from "../../src/reading/read-pattern.js";
import { Random } from "../kit/random.js";

/** Counts, ratings, rounded readings and features with many zeros: the cases that the simulated families leave out. */
const N = 20_000;

function sideOf(n: number, seed: number, draw: (random: Random) => number, compression?: number) {
  const random = new Random(seed);
  const sketch = new NumericSketch(compression === undefined ? {} : { compression });
  sketch.addColumn(Float64Array.from({ length: n }, () => draw(random)));
  return { cdf: sketch.toCdf(), events: n, missing: 0, nonFinite: 0 };
}

function read(before: (random: Random) => number, now: (random: Random) => number, m = 5_000) {
  return readPattern(sideOf(N, 7_301, before, 500), sideOf(m, 7_302, now));
}

function poisson(mean: number) {
  return (random: Random): number => {
    let [value, share, left] = [0, Math.exp(-mean), random.uniform()];
    while (left > share && value < 500) {
      left -= share;
      value += 1;
      share *= mean / value;
    }
    return value;
  };
}

const five = poisson(5);
const halves = (by: number, factor: number) => (random: Random) =>
  Math.round(2 * (factor * random.normal() + by)) / 2;
const zeros = (share: number, factor: number) => (random: Random) =>
  random.uniform() < share ? 0 : factor * Math.exp(0.6 * random.normal());
const rating =
  (...shares: readonly number[]) =>
  (random: Random): number => {
    let left = random.uniform();
    for (const [i, share] of shares.entries()) {
      left -= share;
      if (left < 0) return i + 1;
    }
    return shares.length;
  };

describe("readPattern where values repeat", () => {
  test.each([
    { name: "counts that stayed", before: five, now: five, kind: "none" },
    { name: "counts that rose by one", before: five, now: (r: Random) => five(r) + 1, kind: "location" },
    { name: "counts of a greater mean", before: five, now: poisson(8), kind: "location and scale" },
    { name: "counts in tens", before: five, now: (r: Random) => 10 * five(r), kind: "unit change" },
    {
      name: "counts of which some are zero for want of one",
      before: five,
      now: (r: Random) => (r.uniform() < 0.08 ? 0 : five(r)),
      kind: "default-fill",
    },
    {
      name: "counts cut off at eight",
      before: five,
      now: (r: Random) => Math.min(8, five(r)),
      kind: "clipped",
    },
    {
      name: "counts without fours",
      before: five,
      now: (r: Random) => {
        let value = five(r);
        while (value === 4) value = five(r);
        return value;
      },
      kind: "vanished atom",
    },
    { name: "rounded readings that moved", before: halves(0, 1), now: halves(0.4, 1), kind: "location" },
    { name: "rounded readings that spread", before: halves(0, 1), now: halves(0, 1.4), kind: "scale" },
    {
      name: "readings that are no longer rounded",
      before: halves(0, 1),
      now: (r: Random) => r.normal(),
      kind: "rounding",
    },
    { name: "many zeros and nothing new", before: zeros(0.8, 1), now: zeros(0.8, 1), kind: "none" },
    { name: "more zeros", before: zeros(0.3, 1), now: zeros(0.45, 1), kind: "default-fill" },
    {
      name: "zeros that stayed beside values that grew",
      before: zeros(0.3, 1),
      now: zeros(0.3, 1.4),
      kind: "location and scale",
    },
    {
      name: "ratings that stayed",
      before: rating(0.1, 0.2, 0.4, 0.2, 0.1),
      now: rating(0.1, 0.2, 0.4, 0.2, 0.1),
      kind: "none",
    },
    {
      name: "ratings that parted",
      before: rating(0.1, 0.2, 0.4, 0.2, 0.1),
      now: rating(0.25, 0.2, 0.1, 0.2, 0.25),
      kind: "shape",
    },
  ])("readPattern of $name is $kind", ({ before, now, kind }) => {
    const reading = read(before, now);
    expect(reading.kind, reading.sentence).toBe(kind);
  });

  test("readPattern leaves a common value out of the move that it tells, and says so", () => {
    const { sentence, figures } = read(zeros(0.3, 1), zeros(0.3, 1.4));
    expect(sentence).toMatch(/^apart from the value 0, everything moved up by about 0\.[34]\d* \(/);
    expect(figures["factor"]).toBeGreaterThan(1.3);
    expect(figures["factor"]).toBeLessThan(1.5);
  });

  test("readPattern tells a small move of many values as a move, with an interval around it", () => {
    const normal = (by: number) => (random: Random) => random.normal() + by;
    const { kind, figures } = read(normal(0), normal(0.08), 100_000);
    expect(kind).toBe("location");
    expect(figures["low"]).toBeLessThan(0.08);
    expect(figures["high"]).toBeGreaterThan(0.08);
  });

  test("readPattern of a heavy-tailed feature in another unit names the unit", () => {
    const heavy = (factor: number) => (random: Random) => factor * Math.exp(2 * random.normal());
    const reading = read(heavy(1), heavy(1_000));
    expect(reading.kind).toBe("unit change");
    expect(reading.sentence).toContain("values are 1,000 times the baseline's");
  });

  test("readPattern counts the rank error of sketches: a thousand million like events read as none", () => {
    for (const seed of [11, 12, 13]) {
      const heavy = (n: number, s: number, compression?: number) => {
        const { cdf, ...side } = sideOf(n, s, (random) => random.normal(), compression);
        const by = 1e9 / n;
        const [below, upTo] = [cdf.below.map((x) => x * by), cdf.upTo.map((x) => x * by)];
        return { ...side, cdf: { ...cdf, n: 1e9, below, upTo } };
      };
      const reading = readPattern(heavy(1_000_000, seed, 500), heavy(1_000_000, seed + 100));
      expect(reading.kind, reading.sentence).toBe("none");
    }
  });

  test("readPattern names nothing that few values cannot show", () => {
    const normal = (random: Random) => random.normal();
    const told = Array.from({ length: 60 }, (_, i) => {
      const before = sideOf(N, 900 + i, normal, 500);
      const now = sideOf(80, 2_900 + i, (random) => 0.4 + 1.3 * random.normal());
      return readPattern(before, now).kind;
    });
    const honest = new Set(["none", "location", "scale", "location and scale", "cannot tell"]);
    expect(told.filter((kind) => !honest.has(kind))).toEqual([]);
  });
});
