import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../../src/cdf-of.js";
import type { CdfView } from "../../src/cdf-view.js";
import { wassersteinChange } from "../../src/noise/wasserstein-change.js";
import { wassersteinError } from "../../src/noise/wasserstein-error.js";
import { TAIL_RANGES, wassersteinNoise } from "../../src/noise/wasserstein-noise.js";
import { wasserstein1 } from "../../src/wasserstein1.js";
import { Random } from "../kit/random.js";
import { PROPERTY, samples, slopingViews } from "../kit/samples.js";
import { stepped } from "../kit/stepped-view.js";

const FAMILIES = [
  { name: "normal", draw: (r: Random) => r.normal() },
  { name: "lognormal", draw: (r: Random) => Math.exp(r.normal()) },
  { name: "30 % zeros", draw: (r: Random) => (r.uniform() < 0.3 ? 0 : r.normal()) },
] as const;

function mean(values: readonly number[]): number {
  return values.reduce((a, b) => a + b, 0) / values.length;
}

/** ψ by its definition on raw values, then both variances: sgn(F − G) added up below each value. */
function bruteError(a: readonly number[], b: readonly number[]): number {
  const xs = [...new Set([...a, ...b])].sort((x, y) => x - y);
  const share = (sample: readonly number[], x: number) => sample.filter((v) => v <= x).length / sample.length;
  const psi = new Map<number, number>();
  let at = 0;
  for (const [i, x] of xs.entries()) {
    psi.set(x, at);
    if (i + 1 < xs.length)
      at +=
        Math.sign(share(a, x) * b.length * a.length - share(b, x) * b.length * a.length) * (xs[i + 1]! - x);
  }
  const variance = (sample: readonly number[]) => {
    const values = sample.map((v) => psi.get(v)!);
    return mean(values.map((v) => (v - mean(values)) ** 2));
  };
  return Math.sqrt(variance(a) / a.length + variance(b) / b.length);
}

describe("wassersteinNoise({ baseline, m })", () => {
  test("on raw values is √(2/π)·Σ √(F(1 − F)/M) over the gaps", () => {
    const values = [1, 1, 4, 9, 10];
    const expected =
      Math.sqrt(2 / Math.PI / (5 / 1.5)) * (3 * Math.sqrt(0.24) + 5 * Math.sqrt(0.24) + Math.sqrt(0.16));
    expect(wassersteinNoise({ baseline: cdfOf(values), m: 10 })).toBeCloseTo(expected, 12);
  });

  test("of a slope is the area by fine steps, over all ranks and over a range", () => {
    fc.assert(
      fc.property(slopingViews, (view) => {
        for (const range of [
          { from: 0, to: 1 },
          { from: 0.3, to: 0.8 },
        ]) {
          let area = 0;
          for (let i = 0; i + 1 < view.values.length; i += 1) {
            const steps = 4000;
            const width = (view.values[i + 1]! - view.values[i]!) / steps;
            for (let k = 0; k < steps; k += 1) {
              const f = (view.upTo[i]! + ((view.below[i + 1]! - view.upTo[i]!) * (k + 0.5)) / steps) / view.n;
              if (f >= range.from && f <= range.to) area += width * Math.sqrt(f * (1 - f));
            }
          }
          const expected = Math.sqrt(2 / Math.PI / view.n) * area;
          const actual = wassersteinNoise({ baseline: view, m: 1e15, range });
          expect(Math.abs(actual - expected)).toBeLessThanOrEqual(2e-3 * Math.max(actual, 1e-6));
        }
      }),
      { ...PROPERTY, numRuns: 40 },
    );
  });

  test.each(FAMILIES)(
    "is the mean distance of 300 draws without a change, within 12 %: $name",
    ({ draw }) => {
      const random = new Random(8501);
      const baseline = cdfOf(random.sample(20_000, draw));
      const distances: number[] = [];
      const tails: number[] = [];
      for (let i = 0; i < 300; i += 1) {
        const production = cdfOf(random.sample(500, draw));
        distances.push(wasserstein1(baseline, production));
        tails.push(wasserstein1(baseline, production, TAIL_RANGES.upper));
      }
      const ratio = mean(distances) / wassersteinNoise({ baseline, m: 500 });
      expect(Math.abs(ratio - 1)).toBeLessThan(0.12);
      const tail = mean(tails) / wassersteinNoise({ baseline, m: 500, range: TAIL_RANGES.upper });
      expect(Math.abs(tail - 1)).toBeLessThan(0.2);
      const above = (limit: number, values: readonly number[], noise: number) =>
        values.filter((v) => v > limit * noise).length / values.length;
      expect(above(2.4, distances, wassersteinNoise({ baseline, m: 500 }))).toBeLessThan(0.025);
      expect(
        above(3.6, tails, wassersteinNoise({ baseline, m: 500, range: TAIL_RANGES.upper })),
      ).toBeLessThan(0.025);
    },
  );

  test("constant baseline → 0; grows with √D; an empty side → INPUT error; ±MAX_VALUE stay finite", () => {
    expect(wassersteinNoise({ baseline: cdfOf([2, 2, 2]), m: 5 })).toBe(0);
    const baseline = cdfOf([1, 2, 3]);
    const ratio =
      wassersteinNoise({ baseline, m: 9, designEffect: 4 }) / wassersteinNoise({ baseline, m: 9 });
    expect(ratio).toBeCloseTo(2, 12);
    expect(() => wassersteinNoise({ baseline, m: 0 })).toThrow(
      "needs at least one finite value on each side",
    );
    const far = cdfOf([-Number.MAX_VALUE, Number.MAX_VALUE]);
    expect(Number.isFinite(wassersteinNoise({ baseline: far, m: 3 }))).toBe(true);
  });
});

describe("wassersteinError(baseline, production)", () => {
  test("equals the definition summed on raw values", () => {
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        const expected = bruteError(a, b);
        const scale = Math.max(...a, ...b) - Math.min(...a, ...b);
        expect(Math.abs(wassersteinError(cdfOf(a), cdfOf(b)) - expected)).toBeLessThanOrEqual(1e-6 * scale);
      }),
      PROPERTY,
    );
  });

  test("of sloping views is the limit of finer and finer steps, over all ranks and over a range", () => {
    fc.assert(
      fc.property(slopingViews, slopingViews, (a, b) => {
        for (const range of [
          { from: 0, to: 1 },
          { from: 0.3, to: 0.8 },
        ]) {
          const fine = wassersteinError(stepped(a, 4000), stepped(b, 4000), { range });
          const scale = (a.values.at(-1)! - a.values[0]! + b.values.at(-1)! - b.values[0]!) / Math.sqrt(a.n);
          expect(Math.abs(wassersteinError(a, b, { range }) - fine)).toBeLessThanOrEqual(2e-3 * scale + 1e-9);
        }
      }),
      { ...PROPERTY, numRuns: 60 },
    );
  });

  test("of a pure shift is that of two means: √(s²/n + s²/m)", () => {
    const random = new Random(8502);
    const a = random.sample(4000);
    const b = a.map((v) => v + 100);
    const variance = mean(a.map((v) => v * v)) - mean(a) ** 2;
    expect(wassersteinError(cdfOf(a), cdfOf(b)) / Math.sqrt((2 * variance) / 4000)).toBeCloseTo(1, 10);
  });
});

describe("wassersteinChange(baseline, production)", () => {
  test.each([
    { name: "shift .5", shift: 0.5, scale: 1 },
    { name: "scale 1.3", shift: 0, scale: 1.3 },
    { name: "both", shift: 0.5, scale: 1.3 },
  ])("its interval covers the true distance in 90 to 99 % of 250 draws: $name", ({ shift, scale }) => {
    const random = new Random(8503);
    const even = Array.from({ length: 20_000 }, (_, i) => (i + 0.5) / 20_000);
    const truth = wasserstein1(
      cdfOf(even.map(logistic)),
      cdfOf(even.map((u) => shift + scale * logistic(u))),
    );
    let covered = 0;
    for (let i = 0; i < 250; i += 1) {
      const baseline = cdfOf(random.sample(5000, (r) => logistic(r.uniform())));
      const production = cdfOf(random.sample(1000, (r) => shift + scale * logistic(r.uniform())));
      const { aboveNoise, interval } = wassersteinChange(baseline, production);
      // Where it is not above noise no interval is claimed; such draws count as missed.
      if (aboveNoise && interval![0] <= truth && truth <= interval![1]) covered += 1;
    }
    expect(covered / 250).toBeGreaterThanOrEqual(0.9);
    expect(covered / 250).toBeLessThanOrEqual(0.99);
  });

  test("identical samples are not above noise and have no interval", () => {
    const view = cdfOf([1, 2, 3, 4]);
    expect(wassersteinChange(view, view)).toMatchObject({ distance: 0, aboveNoise: false, interval: null });
  });

  test("a constant baseline and another value: above noise, an interval of no width", () => {
    const change = wassersteinChange(cdfOf([5, 5]), cdfOf([7, 7, 7]));
    expect(change).toEqual({ distance: 2, noise: 0, aboveNoise: true, interval: [2, 2] });
  });

  test.each([
    ["one value a side", [1], [2]],
    ["the ends of the doubles", [-Number.MAX_VALUE, 0], [Number.MAX_VALUE, 1]],
    ["zero against many", [0], Array.from({ length: 50 }, (_, i) => i)],
  ])("%s: everything finite, through JSON unchanged", (_, a, b) => {
    for (const range of [undefined, TAIL_RANGES.upper, TAIL_RANGES.lower]) {
      const change = wassersteinChange(cdfOf(a), cdfOf(b), range === undefined ? {} : { range });
      expect(JSON.parse(JSON.stringify(change))).toEqual(change);
    }
  });

  test("views of 10⁹ events give finite figures", () => {
    const heavy = (at: number): CdfView => ({
      n: 1e9,
      values: Float64Array.of(0, 1, 2),
      below: Float64Array.of(0, at, 1e9 - 1),
      upTo: Float64Array.of(1, at + 10, 1e9),
      exact: false,
      rankErrorAt: () => 0,
    });
    const change = wassersteinChange(heavy(4e8), heavy(4.1e8));
    expect(change.distance).toBeCloseTo(0.01, 6);
    expect(change.aboveNoise).toBe(true);
    expect(change.interval![1] - change.interval![0]).toBeLessThan(1e-3);
  });
});

/** A standard logistic variable, whose quantiles have a closed form. */
function logistic(rank: number): number {
  return Math.log(rank / (1 - rank));
}
