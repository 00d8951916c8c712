import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { NumericSketch } from "../src/index.js";
import { countIn, supError, type7 } from "./support/brute-force.js";
import { SAMPLES, sampleOf } from "./support/samples.js";

const SEED = 20_190_204;
const check = (property: Parameters<typeof fc.assert>[0], numRuns = 100): void => {
  fc.assert(property, { seed: SEED, numRuns });
};

const finite = fc.double({ noNaN: true, noDefaultInfinity: true });
const fewDistinct = fc.integer({ min: -3, max: 3 }).map((i) => i / 2);
const values = fc.oneof(
  fc.array(finite, { minLength: 1, maxLength: 300 }),
  fc.array(fewDistinct, { minLength: 1, maxLength: 300 }),
  fc.array(fc.constantFrom(Number.MAX_VALUE, -Number.MAX_VALUE, 0, -0, 5e-324), {
    minLength: 1,
    maxLength: 60,
  }),
);
const rank = fc.double({ min: 0, max: 1, noNaN: true });

function sketchOf(sample: ArrayLike<number>): NumericSketch {
  const sketch = new NumericSketch();
  for (let i = 0; i < sample.length; i++) sketch.add(sample[i]!);
  return sketch;
}

describe("laws of an exact sketch, any values", () => {
  it("is exact, holds every event, and has min and max", () => {
    check(
      fc.property(values, (sample) => {
        const sketch = sketchOf(sample);
        const sorted = Float64Array.from(sample, (v) => v + 0).sort();
        expect(sketch.checkInvariants()).toEqual([]);
        expect([sketch.exact, sketch.counts.finite]).toEqual([true, sample.length]);
        expect([sketch.min, sketch.max]).toEqual([sorted[0], sorted[sorted.length - 1]]);
        expect(Number.isFinite(sketch.sum)).toBe(true);
        expect(supError(sorted, sketch.toCdf())).toBe(0);
      }),
    );
  });

  it("cdf and cdfBelow equal counting, on values, between them and outside", () => {
    check(
      fc.property(values, finite, (sample, other) => {
        const sketch = sketchOf(sample);
        const sorted = Float64Array.from(sample).sort();
        for (const value of [...sample, other, Number.MAX_VALUE, -Number.MAX_VALUE]) {
          expect(sketch.cdf(value)).toBe(countIn(sorted, value, "upTo") / sample.length);
          expect(sketch.cdfBelow(value)).toBe(countIn(sorted, value, "below") / sample.length);
        }
      }),
    );
  });

  it("quantile(rank) equals type 7", () => {
    const moderate = fc.array(fc.double({ noNaN: true, min: -1e6, max: 1e6 }), {
      minLength: 1,
      maxLength: 400,
    });
    check(
      fc.property(moderate, rank, (sample, q) => {
        const sorted = Float64Array.from(sample).sort();
        const miss = Math.abs(sketchOf(sample).quantile(q) - type7(sorted, q));
        // The place (n − 1)·rank is rounded, so that values 2e6 apart may differ by 400 ulp of it.
        expect(miss).toBeLessThanOrEqual(2e6 * 400 * Number.EPSILON);
      }),
    );
  });

  it("the order of values does not matter", () => {
    check(
      fc.property(values, (sample) => {
        const turned = sketchOf(sample.toReversed());
        expect(turned.toCdf().values).toEqual(sketchOf(sample).toCdf().values);
        expect(turned.toCdf().upTo).toEqual(sketchOf(sample).toCdf().upTo);
      }),
    );
  });
});

describe.each(Object.keys(SAMPLES))("laws on %s", (name) => {
  const size = fc.integer({ min: 1, max: 30_000 });
  const seed = fc.integer({ min: 1, max: 1e6 });

  it("conserves weight, keeps the invariants, min and max, and the size bound", () => {
    check(
      fc.property(size, seed, (n, s) => {
        const sample = sampleOf(name, n, s);
        const sketch = new NumericSketch();
        sketch.addColumn(sample);
        const sorted = sample.slice().sort();
        expect(sketch.checkInvariants()).toEqual([]);
        expect(NumericSketch.decode(sketch.encode()).checkInvariants()).toEqual([]);
        expect(sketch.counts.finite).toBe(n);
        expect([sketch.min, sketch.max]).toEqual([sorted[0]! + 0, sorted[n - 1]! + 0]);
        expect(sketch.toCdf().upTo.at(-1)).toBe(n);
        expect(sketch.toCdf().values.length).toBeLessThanOrEqual(4 * 200 + 32);
      }),
      6,
    );
  });

  it("cdf and quantile never decrease and stay in range", () => {
    check(
      fc.property(size, seed, fc.array(rank, { minLength: 2, maxLength: 50 }), (n, s, ranks) => {
        const sketch = new NumericSketch();
        sketch.addColumn(sampleOf(name, n, s));
        const ascending = ranks.toSorted((a, b) => a - b);
        const quantiles = ascending.map((q) => sketch.quantile(q));
        const below = quantiles.map((v) => sketch.cdfBelow(v));
        const upTo = quantiles.map((v) => sketch.cdf(v));
        for (const list of [quantiles, below, upTo]) expect(list).toEqual(list.toSorted((a, b) => a - b));
        quantiles.forEach((v, i) => {
          expect(v >= sketch.min! && v <= sketch.max!).toBe(true);
          expect(0 <= below[i]! && below[i]! <= upTo[i]! && upTo[i]! <= 1).toBe(true);
        });
      }),
      6,
    );
  });

  it("knots are distinct, ascending, and their ranks never descend", () => {
    const sketch = new NumericSketch();
    sketch.addColumn(sampleOf(name, 20_000, 4));
    const { values: knots, below, upTo } = sketch.toCdf();
    for (let i = 0; i < knots.length; i++) {
      expect(upTo[i]!).toBeGreaterThanOrEqual(below[i]!);
      if (i === 0) continue;
      expect(knots[i]!).toBeGreaterThan(knots[i - 1]!);
      expect(below[i]!).toBeGreaterThanOrEqual(upTo[i - 1]!);
    }
  });
});
