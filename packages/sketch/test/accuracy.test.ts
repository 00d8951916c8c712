import { describe, expect, it } from "vitest";
import { NumericSketch } from "../src/index.js";
import { countIn, supError } from "./support/brute-force.js";
import { SAMPLES, sampleOf } from "./support/samples.js";

// The committed table (docs/accuracy.md) has more rows and 1e6 values; these are the bounds below which no change may fall.
const N = 200_000;

/** Largest rank error, as a fraction, of a live and of a sealed sketch. */
const BOUNDS: Readonly<Record<string, readonly [number, number]>> = {
  "10 distinct": [0, 0],
  // A value of 0.13 % that is not among the 32 atoms is drawn as part of a cluster.
  "rounded to 0.01": [3e-3, 3e-3],
};
const USUAL_BOUNDS = [7e-4, 1e-3] as const;

describe.each(Object.keys(SAMPLES))("rank error on %s", (name) => {
  const sample = sampleOf(name, N, 77);
  const sketch = new NumericSketch();
  sketch.addColumn(sample);
  const sealed = NumericSketch.decode(sketch.encode());
  const sorted = sample.slice().sort();

  it("stays within its bound, live and sealed", () => {
    const [live, encoded] = BOUNDS[name] ?? USUAL_BOUNDS;
    expect(supError(sorted, sketch.toCdf())).toBeLessThanOrEqual(live);
    expect(supError(sorted, sealed.toCdf())).toBeLessThanOrEqual(encoded);
  });

  it("stays within rankErrorAt(rank) of the knots, but for the events of one value", () => {
    for (const knots of [sketch.toCdf(), sealed.toCdf()]) {
      const cdf = knots === sketch.toCdf() ? sketch : sealed;
      for (let rank = 0.001; rank < 1; rank += 0.001) {
        const value = sorted[Math.floor(rank * N)]!;
        const ties = countIn(sorted, value, "upTo") - countIn(sorted, value, "below");
        const allowed = knots.rankErrorAt(rank) + (name === "rounded to 0.01" ? ties / N : 0) + 1 / N;
        expect(Math.abs(cdf.cdf(value) - countIn(sorted, value, "upTo") / N)).toBeLessThanOrEqual(allowed);
      }
    }
  });
});

describe("atoms", () => {
  it.each([
    ["at the minimum", 0.7, 0, (random: number) => 1 + random],
    ["in the middle", 0.01, 0.5, (random: number) => random],
    ["at the maximum", 0.05, 1, (random: number) => random],
  ])("an atom %s has both limits of the CDF within 1e-3", (_, share, value, draw) => {
    const uniform = sampleOf("uniform", 2 * N, 12);
    const sample = Float64Array.from({ length: N }, (_unused, i) =>
      uniform[2 * i]! < share ? value : draw(uniform[2 * i + 1]!),
    );
    const sketch = new NumericSketch();
    sketch.addColumn(sample);
    const sorted = sample.slice().sort();
    const sealed = NumericSketch.decode(sketch.encode());
    expect(sealed.atoms().map((atom) => atom.value)).toEqual([value]);
    expect(Math.abs(sealed.cdf(value) - countIn(sorted, value, "upTo") / N)).toBeLessThanOrEqual(1e-3);
    expect(Math.abs(sealed.cdfBelow(value) - countIn(sorted, value, "below") / N)).toBeLessThanOrEqual(1e-3);
  });

  it("known atoms are counted exactly from the first event on, even when rare", () => {
    const sample = sampleOf("normal", N, 13);
    for (let i = 0; i < N; i += 5_000) sample[i] = 0.125;
    const sketch = new NumericSketch({ knownAtoms: [99, 0.125] });
    sketch.addColumn(sample);
    expect(sketch.atoms()).toEqual([{ value: 0.125, count: N / 5_000 }]);
    expect(NumericSketch.decode(sketch.encode()).atoms()).toEqual(sketch.atoms());
  });

  it("an atom that shows only after a million values is found, and an old one is not lost for it", () => {
    const sketch = new NumericSketch();
    const before = sampleOf("70 % zeros", 1_000_000, 14);
    sketch.addColumn(before);
    const after = sampleOf("uniform", 100_000, 15).map((v, i) => (i % 50 === 0 ? -5 : v));
    sketch.addColumn(after);
    const zeros = before.filter((v) => v === 0).length;
    const atoms = new Map(sketch.atoms().map(({ value, count }) => [value, count]));
    expect(atoms.get(0)).toBe(zeros);
    expect(atoms.get(-5)).toBeGreaterThan(1_950);
  });

  it("of more than 32 repeating values the most frequent stay, and none is lost from the counts", () => {
    const uniform = sampleOf("uniform", 2 * N, 16);
    // 60 atoms: one of 20 %, the rest 1 % each; and a continuous rest.
    const sample = Float64Array.from({ length: N }, (_, i) => {
      const u = uniform[2 * i]!;
      return u < 0.2 ? 1000 : u < 0.79 ? Math.floor(u * 100) : 200 + 100 * uniform[2 * i + 1]!;
    });
    const sketch = new NumericSketch();
    sketch.addColumn(sample);
    expect(sketch.atoms()).toHaveLength(32);
    expect(sketch.checkInvariants()).toEqual([]);
    const sorted = sample.slice().sort();
    expect(Math.abs(sketch.cdfBelow(1000) - countIn(sorted, 1000, "below") / N)).toBeLessThanOrEqual(1e-3);
    expect(supError(sorted, sketch.toCdf())).toBeLessThanOrEqual(1e-2);
  });
});
