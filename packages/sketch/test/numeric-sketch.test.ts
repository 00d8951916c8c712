import { isMoorlineError } from "@moorline/errors";
import { describe, expect, it } from "vitest";
import { NumericSketch } from "../src/index.js";
import { sampleOf } from "./support/samples.js";

function sketchOf(values: Iterable<number>, options = {}): NumericSketch {
  const sketch = new NumericSketch(options);
  for (const value of values) sketch.add(value);
  return sketch;
}

function codeOf(work: () => unknown): string {
  try {
    work();
  } catch (error) {
    if (isMoorlineError(error)) return error.code;
    throw error;
  }
  return "nothing thrown";
}

describe("NumericSketch that is empty", () => {
  it("has zero counts, no minimum, no maximum, a sum of 0 and no knots", () => {
    const sketch = new NumericSketch();
    expect(sketch.counts).toEqual({
      events: 0,
      finite: 0,
      missing: 0,
      nan: 0,
      positiveInfinity: 0,
      negativeInfinity: 0,
    });
    expect([sketch.min, sketch.max, sketch.sum, sketch.exact]).toEqual([null, null, 0, true]);
    expect(sketch.toCdf()).toMatchObject({ n: 0, exact: true });
    expect(sketch.toCdf().values).toHaveLength(0);
    expect(sketch.atoms()).toEqual([]);
    expect(sketch.thresholdCounts()).toBeNull();
  });

  it("refuses quantile(rank), cdf(value) and cdfBelow(value): an answer is never NaN", () => {
    const sketch = sketchOf([Number.NaN]);
    for (const work of [() => sketch.quantile(0.5), () => sketch.cdf(0), () => sketch.cdfBelow(0)]) {
      expect(codeOf(work)).toBe("MOORLINE_STATE_EMPTY_SKETCH");
    }
  });
});

describe("NumericSketch arguments", () => {
  it.each([-0.001, 1.001, Number.NaN])("quantile(%s) is an INPUT error", (rank) => {
    expect(codeOf(() => sketchOf([1]).quantile(rank))).toBe("MOORLINE_INPUT_RANK_RANGE");
  });

  it("cdf(NaN) is an INPUT error, cdf(±Infinity) is 0 and 1", () => {
    const sketch = sketchOf([1, 2]);
    expect(codeOf(() => sketch.cdf(Number.NaN))).toBe("MOORLINE_INPUT_SKETCH_VALUE");
    expect(sketch.cdf(Number.NEGATIVE_INFINITY)).toBe(0);
    expect(sketch.cdf(Number.POSITIVE_INFINITY)).toBe(1);
  });

  it.each([99, 2001, 150.5, Number.NaN])("a compression of %s is an INPUT error", (compression) => {
    expect(codeOf(() => new NumericSketch({ compression }))).toBe("MOORLINE_INPUT_SKETCH_COMPRESSION");
  });

  it.each([
    [[2, 1]],
    [[Number.NaN]],
    [[Number.POSITIVE_INFINITY]],
    [Array.from({ length: 12 }, (_, i) => i)],
  ])("thresholds %j are an INPUT error", (values) => {
    const thresholds = { id: "b", values };
    expect(codeOf(() => new NumericSketch({ thresholds }))).toBe("MOORLINE_INPUT_SKETCH_THRESHOLDS");
  });

  it("more than 32 known atoms, or one that is not finite, are an INPUT error", () => {
    const many = Array.from({ length: 33 }, (_, i) => i);
    for (const knownAtoms of [many, [Number.NaN]]) {
      expect(codeOf(() => new NumericSketch({ knownAtoms }))).toBe("MOORLINE_INPUT_SKETCH_ATOMS");
    }
  });

  it.each([-1, 0.5, Number.NaN])("addMissing(%s) is an INPUT error", (count) => {
    expect(codeOf(() => new NumericSketch().addMissing(count))).toBe("MOORLINE_INPUT_SKETCH_COUNT");
  });

  it("addColumn refuses a length beyond the column", () => {
    expect(codeOf(() => new NumericSketch().addColumn(new Float64Array(3), 4))).toBe(
      "MOORLINE_INPUT_SKETCH_COUNT",
    );
  });
});

describe("counts by kind", () => {
  it("counts NaN, infinities and missing apart, and events is their sum", () => {
    const sketch = new NumericSketch();
    const { NaN: nan, POSITIVE_INFINITY: plus, NEGATIVE_INFINITY: minus } = Number;
    sketch.addColumn(Float64Array.of(1, nan, plus, minus, plus, 2, nan, nan));
    sketch.addMissing(4);
    sketch.addMissing();
    expect(sketch.counts).toEqual({
      events: 13,
      finite: 2,
      missing: 5,
      nan: 3,
      positiveInfinity: 2,
      negativeInfinity: 1,
    });
    expect([sketch.min, sketch.max, sketch.sum]).toEqual([1, 2, 3]);
  });

  it("counts non-finite values that stand in a full column", () => {
    const values = sampleOf("normal", 10_000, 3);
    for (let i = 0; i < values.length; i += 100) values[i] = i % 200 === 0 ? Number.NaN : -1 / 0;
    const sketch = new NumericSketch();
    sketch.addColumn(values);
    expect(sketch.counts).toMatchObject({ events: 10_000, finite: 9_900, nan: 50, negativeInfinity: 50 });
  });

  it("addColumn(values, length) takes only the first values", () => {
    const sketch = new NumericSketch();
    sketch.addColumn(Float64Array.of(1, 2, 3, 4), 2);
    expect([sketch.counts.finite, sketch.max]).toEqual([2, 2]);
  });

  it("sum stays at MAX_VALUE instead of becoming infinite or NaN", () => {
    const huge = Number.MAX_VALUE;
    expect(sketchOf([huge, huge]).sum).toBe(huge);
    expect(sketchOf([-huge, -huge]).sum).toBe(-huge);
    expect(sketchOf([huge, huge, -huge, -huge]).sum).toBe(0);
  });

  it("takes −0 as 0", () => {
    const sketch = sketchOf([-0, 0, -0]);
    expect(Object.is(sketch.min, 0)).toBe(true);
    expect(sketch.toCdf().values).toEqual(Float64Array.of(0));
  });
});

describe("cdf(value) and quantile(rank) of an exact sketch", () => {
  const sketch = sketchOf([3, 1, 2, 2, 10]);

  it("cdf is right-continuous, cdfBelow is its left limit", () => {
    expect([sketch.cdf(2), sketch.cdfBelow(2)]).toEqual([0.6, 0.2]);
    expect([sketch.cdf(0.5), sketch.cdf(1), sketch.cdfBelow(1), sketch.cdf(10)]).toEqual([0, 0.2, 0, 1]);
  });

  it("quantile is type 7, as R's quantile(c(1,2,2,3,10), c(0,.1,.25,.5,.9,1))", () => {
    const ranks = [0, 0.1, 0.25, 0.5, 0.9, 1];
    const expected = [1, 1.4, 2, 2, 7.2, 10];
    ranks.forEach((rank, i) => {
      expect(Math.abs(sketch.quantile(rank) - expected[i]!)).toBeLessThanOrEqual(4 * Number.EPSILON * 10);
    });
  });

  it("a single value is every quantile", () => {
    const one = sketchOf([-7.5]);
    expect([one.quantile(0), one.quantile(0.3), one.quantile(1)]).toEqual([-7.5, -7.5, -7.5]);
  });
});

describe("thresholdCounts()", () => {
  const thresholds = { id: "sha256:abc", values: [-1, 0, 0, 2.5] };

  it("counts values ≤ each threshold exactly, while buffered and after flushes", () => {
    const values = sampleOf("normal", 50_000, 5);
    for (const n of [3, 700, 5_000, 50_000]) {
      const sketch = new NumericSketch({ thresholds });
      sketch.addColumn(values, n);
      const counts = thresholds.values.map((t) => values.subarray(0, n).filter((v) => v <= t).length);
      expect(sketch.thresholdCounts()).toEqual({ ...thresholds, counts });
    }
  });
});

describe("reading", () => {
  it("changes nothing: a sketch that was read all the way gives the same bytes", () => {
    const values = sampleOf("lognormal", 9_000, 8);
    const quiet = sketchOf(values);
    const read = new NumericSketch();
    values.forEach((value, i) => {
      read.add(value);
      if (i % 37 === 0) {
        read.quantile(0.99);
        read.counts;
        if (i % 370 === 0) read.encode();
      }
    });
    expect(read.encode()).toEqual(quiet.encode());
  });

  it("add(value) for each and addColumn(values) give the same bytes, however the column is cut", () => {
    const values = sampleOf("70 % zeros", 20_000, 9);
    values[4_000] = Number.NaN;
    const one = sketchOf(values);
    const whole = new NumericSketch();
    whole.addColumn(values);
    const cut = new NumericSketch();
    for (let at = 0; at < values.length; at += 777) cut.addColumn(values.subarray(at, at + 777));
    expect(whole.encode()).toEqual(one.encode());
    expect(cut.encode()).toEqual(one.encode());
  });
});

describe("sizeInBytes()", () => {
  it("is small for a small sketch and bounded for a large one", () => {
    expect(sketchOf(sampleOf("normal", 20, 1)).sizeInBytes()).toBeLessThan(1_500);
    const large = new NumericSketch();
    large.addColumn(sampleOf("normal", 200_001, 1));
    expect(large.sizeInBytes()).toBeLessThan(60_000);
  });
});
