import { describe, expect, it } from "vitest";
import { NumericSketch } from "../src/index.js";
import { countIn, supError } from "./support/brute-force.js";
import { SAMPLES, sampleOf } from "./support/samples.js";

function sketchOf(values: Float64Array, options = {}): NumericSketch {
  const sketch = new NumericSketch(options);
  sketch.addColumn(values);
  return sketch;
}

function partsOf(sample: Float64Array, parts: number, options = {}): NumericSketch[] {
  const size = Math.ceil(sample.length / parts);
  return Array.from({ length: parts }, (_, i) =>
    sketchOf(sample.subarray(i * size, (i + 1) * size), options),
  );
}

describe("merge(sketches)", () => {
  it("of none, and of empty ones, is empty", () => {
    expect(NumericSketch.merge([]).counts.events).toBe(0);
    expect(NumericSketch.merge([new NumericSketch(), new NumericSketch()]).min).toBeNull();
  });

  it("with empty ones gives the same bytes as the sketch alone, exact or not", () => {
    for (const n of [5, 50_000]) {
      const one = sketchOf(sampleOf("lognormal", n, 2));
      const merged = NumericSketch.merge([new NumericSketch(), one, new NumericSketch()]);
      expect(merged.encode()).toEqual(one.encode());
    }
  });

  it("of exact sketches is exact while the distinct values are few, and equals adding them all", () => {
    const sample = sampleOf("10 distinct", 30_000, 3);
    const merged = NumericSketch.merge(partsOf(sample, 100));
    const whole = sketchOf(sample);
    expect(merged.exact).toBe(true);
    expect(merged.toCdf().values).toEqual(whole.toCdf().values);
    expect(merged.toCdf().upTo).toEqual(whole.toCdf().upTo);
  });

  it("of more sketches than one pass takes counts every one", () => {
    const many = Array.from({ length: 5_000 }, (_, i) =>
      sketchOf(Float64Array.of(i, i / 2), { thresholds: { id: "t", values: [100] } }),
    );
    const merged = NumericSketch.merge(many);
    expect(merged.counts.finite).toBe(10_000);
    expect([merged.min, merged.max]).toEqual([0, 4_999]);
    expect(merged.thresholdCounts()?.counts).toEqual([101 + 201]);
    expect(merged.checkInvariants()).toEqual([]);
  });

  it("of two sealed sketches is no worse than a tenth of a cluster", () => {
    // Uncut clusters of two sketches overlapped, and this was 0.43 %.
    const sample = sampleOf("normal", 400_000, 22);
    const sealed = partsOf(sample, 2).map((part) => NumericSketch.decode(part.encode()));
    expect(supError(sample.slice().sort(), NumericSketch.merge(sealed).toCdf())).toBeLessThanOrEqual(1e-3);
  });

  it("does not change what it merges", () => {
    const parts = partsOf(sampleOf("normal", 40_000, 4), 3);
    const before = parts.map((part) => part.encode());
    NumericSketch.merge(parts);
    expect(parts.map((part) => part.encode())).toEqual(before);
  });

  it("adds counts, missing, min, max exactly, and sums within rounding", () => {
    const sample = sampleOf("normal", 10_000, 5);
    sample[17] = Number.NaN;
    sample[4_000] = Number.POSITIVE_INFINITY;
    const parts = partsOf(sample, 7);
    parts[2]!.addMissing(11);
    const merged = NumericSketch.merge(parts);
    const whole = sketchOf(sample);
    whole.addMissing(11);
    expect(merged.counts).toEqual(whole.counts);
    expect([merged.min, merged.max]).toEqual([whole.min, whole.max]);
    expect(Math.abs(merged.sum - whole.sum)).toBeLessThanOrEqual(10_000 * Number.EPSILON * 10_000);
  });

  it("a sketch takes more values after a merge", () => {
    const merged = NumericSketch.merge(partsOf(sampleOf("normal", 40_000, 6), 4));
    merged.addColumn(sampleOf("normal", 40_000, 7));
    expect(merged.counts.finite).toBe(80_000);
    expect(merged.checkInvariants()).toEqual([]);
  });

  it("of sketches of different compression takes the greatest, and decodes", () => {
    const sample = sampleOf("normal", 40_000, 8);
    const merged = NumericSketch.merge([
      sketchOf(sample, { compression: 100 }),
      sketchOf(sample, { compression: 1000 }),
    ]);
    expect(merged.compression).toBe(1000);
    expect(NumericSketch.decode(merged.encode()).checkInvariants()).toEqual([]);
    expect(NumericSketch.merge([merged], { compression: 150 }).compression).toBe(150);
  });
});

describe("merge(sketches) and threshold counts", () => {
  const thresholds = { id: "one", values: [-2, 0, 2] };
  const sample = sampleOf("normal", 20_000, 9);

  it("adds them exactly", () => {
    const counts = thresholds.values.map((t) => sample.filter((v) => v <= t).length);
    const merged = NumericSketch.merge(partsOf(sample, 13, { thresholds }));
    expect(merged.thresholdCounts()).toEqual({ ...thresholds, counts });
  });

  it.each([
    ["another id", { id: "two", values: [-2, 0, 2] }],
    ["other values under the same id", { id: "one", values: [-2, 0, 3] }],
    ["none", undefined],
  ])("drops them when a sketch carries %s", (_, other) => {
    const odd = new NumericSketch(other === undefined ? {} : { thresholds: other });
    odd.add(1);
    expect(NumericSketch.merge([...partsOf(sample, 3, { thresholds }), odd]).thresholdCounts()).toBeNull();
  });

  it("keeps them when a sketch without thresholds saw no event", () => {
    const merged = NumericSketch.merge([new NumericSketch(), ...partsOf(sample, 3, { thresholds })]);
    expect(merged.thresholdCounts()?.id).toBe("one");
  });
});

describe("merge order", () => {
  it.each(Object.keys(SAMPLES))("on %s matters less than 1.5e-3 of rank", (name) => {
    const sample = sampleOf(name, 60_000, 10);
    const sorted = sample.slice().sort();
    const parts = partsOf(sample, 12);
    const bound = name === "rounded to 0.01" ? 3e-3 : 1.5e-3;
    const nested = NumericSketch.merge([
      NumericSketch.merge(parts.slice(0, 5)),
      NumericSketch.merge(parts.slice(5)),
    ]);
    for (const merged of [NumericSketch.merge(parts), NumericSketch.merge(parts.toReversed()), nested]) {
      expect(supError(sorted, merged.toCdf())).toBeLessThanOrEqual(bound);
      expect(merged.checkInvariants()).toEqual([]);
    }
  });
});

describe("1,440 sealed minutes merged into a day", () => {
  const day = (name: string): { merged: NumericSketch; sorted: Float64Array } => {
    const sample = sampleOf(name, 1_440 * 1_500, 20);
    const minutes = partsOf(sample, 1_440).map((minute) => NumericSketch.decode(minute.encode()));
    return { merged: NumericSketch.merge(minutes), sorted: sample.sort() };
  };

  it.each([
    ["lognormal", 5e-4],
    ["diurnal", 5e-4],
    ["70 % zeros", 5e-4],
    ["two far modes", 1.5e-3],
    ["10 distinct", 0],
  ])("%s: rank error at most %f", (name, bound) => {
    const { merged, sorted } = day(name);
    expect(supError(sorted, merged.toCdf())).toBeLessThanOrEqual(bound);
    expect(merged.checkInvariants()).toEqual([]);
  });

  it("an atom of 1 % has both limits within 1e-3, in minutes too small to be compressed as well", () => {
    const uniform = sampleOf("uniform", 1_440 * 600, 21).map((v) => (v < 0.01 ? 0.5 : v));
    const minutes = partsOf(uniform, 1_440).map((minute) => NumericSketch.decode(minute.encode()));
    expect(minutes.every((minute) => minute.exact)).toBe(true);
    const merged = NumericSketch.merge(minutes);
    const sorted = uniform.slice().sort();
    const n = sorted.length;
    expect(merged.atoms()).toEqual([
      { value: 0.5, count: countIn(sorted, 0.5, "upTo") - countIn(sorted, 0.5, "below") },
    ]);
    expect(Math.abs(merged.cdf(0.5) - countIn(sorted, 0.5, "upTo") / n)).toBeLessThanOrEqual(1e-3);
    expect(Math.abs(merged.cdfBelow(0.5) - countIn(sorted, 0.5, "below") / n)).toBeLessThanOrEqual(1e-3);
  });
});
