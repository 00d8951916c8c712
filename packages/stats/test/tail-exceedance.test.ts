import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { clopperPearson } from "../src/clopper-pearson.js";
import { tailExceedance } from "../src/tail-exceedance.js";
import { Random } from "./kit/random.js";

const ramp = (length: number) => Array.from({ length }, (_, i) => i + 1);
const repeat = (value: number, times: number) => Array.from({ length: times }, () => value);

describe("tailExceedance(input)", () => {
  test("tailExceedance of the upper tail is the raw count above the threshold over the baseline's own", () => {
    const a = new Random(51).sample(4000);
    const b = new Random(52).sample(1500, (r) => 1.3 * r.normal());
    const result = tailExceedance({ baseline: cdfOf(a), production: cdfOf(b), rank: 0.99, tail: "upper" });
    const above = b.filter((v) => v > result.threshold).length;
    const own = a.filter((v) => v > result.threshold).length / 4000;
    expect(result.exceedance).toBe(above / 1500);
    expect(result.expected).toBe(own);
    expect(result.ratio).toBeCloseTo(above / 1500 / own, 12);
    expect(result).toMatchObject({ inclusive: false, exactCount: true });
  });

  test("tailExceedance of the lower tail mirrors that of the upper", () => {
    const a = new Random(53).sample(3001);
    const b = new Random(54).sample(1500);
    const negative = (xs: readonly number[]) => cdfOf(xs.map((v) => -v));
    const lower = tailExceedance({ baseline: cdfOf(a), production: cdfOf(b), rank: 0.01, tail: "lower" });
    const upper = tailExceedance({
      baseline: negative(a),
      production: negative(b),
      rank: 0.99,
      tail: "upper",
    });
    expect(lower.threshold).toBeCloseTo(-upper.threshold, 12);
    expect(lower.exceedance).toBe(upper.exceedance);
    expect(lower.ratio).toBeCloseTo(upper.ratio, 12);
    expect(lower.interval[1]).toBeCloseTo(upper.interval[1], 10);
  });

  test("tailExceedance's interval is Clopper–Pearson with nm/(n + m) trials, divided by the baseline's share", () => {
    const a = cdfOf(ramp(1000));
    const b = cdfOf([...ramp(970), ...repeat(2000, 30)]);
    const result = tailExceedance({ baseline: a, production: b, rank: 0.99, tail: "upper" });
    const [low, high] = clopperPearson(15, 500);
    expect(result.exceedance).toBeCloseTo(0.03, 12);
    expect(result.expected).toBeCloseTo(0.01, 12);
    expect(result.interval[0]).toBeCloseTo(low / 0.01, 9);
    expect(result.interval[1]).toBeCloseTo(high / 0.01, 9);
  });

  test("tailExceedance with a design effect of 4 has the interval of a quarter of the events", () => {
    const a = cdfOf(ramp(1000));
    const b = cdfOf([...ramp(960), ...repeat(2000, 40)]);
    const result = tailExceedance({ baseline: a, production: b, rank: 0.99, tail: "upper", designEffect: 4 });
    expect(result.interval[1]).toBeCloseTo(clopperPearson(5, 125)[1] / 0.01, 9);
  });

  test("tailExceedance counts the threshold itself where an atom sits on it: a feature clipped at 10", () => {
    const a = cdfOf([...ramp(9), ...repeat(10, 2)]);
    const b = cdfOf([...ramp(9), ...repeat(10, 9)]);
    const result = tailExceedance({ baseline: a, production: b, rank: 0.95, tail: "upper" });
    expect(result).toMatchObject({ threshold: 10, inclusive: true, exceedance: 0.5 });
    expect(result.expected).toBeCloseTo(2 / 11, 12);
  });

  test("tailExceedance counts zeros at or below zero where half the baseline is zero", () => {
    const a = cdfOf([...repeat(0, 50), ...ramp(50)]);
    const b = cdfOf([...repeat(0, 80), ...ramp(20)]);
    const result = tailExceedance({ baseline: a, production: b, rank: 0.01, tail: "lower" });
    expect(result).toMatchObject({ threshold: 0, inclusive: true, exceedance: 0.8, expected: 0.5 });
    expect(result.ratio).toBeCloseTo(1.6, 12);
  });

  test("tailExceedance with nothing beyond has ratio 0 and a high that still says how little is known", () => {
    const result = tailExceedance({
      baseline: cdfOf(ramp(10_000)),
      production: cdfOf(ramp(50)),
      rank: 0.99,
      tail: "upper",
    });
    expect(result.ratio).toBe(0);
    expect(result.interval[0]).toBe(0);
    expect(result.interval[1]).toBeGreaterThan(5);
  });

  test("tailExceedance takes the kept count where there is one and says so", () => {
    const a = cdfOf(ramp(1000));
    const sketch = { ...cdfOf(ramp(1000)), exact: false };
    const threshold = 990.01;
    const kept = { id: "b1", values: [threshold], counts: [900] };
    const input = { baseline: a, production: sketch, rank: 0.99, tail: "upper", threshold } as const;
    expect(tailExceedance(input)).toMatchObject({ exceedance: 0.01, exactCount: false });
    const counted = tailExceedance({ ...input, thresholdCounts: { production: kept } });
    expect(counted).toMatchObject({ exceedance: 0.1, exactCount: true });
  });

  test("tailExceedance of one value against one value is finite", () => {
    for (const tail of ["lower", "upper"] as const) {
      const result = tailExceedance({ baseline: cdfOf([1]), production: cdfOf([2]), rank: 0.99, tail });
      expect([result.ratio, ...result.interval].every(Number.isFinite)).toBe(true);
    }
  });

  test("tailExceedance refuses a side without values", () => {
    expect(() =>
      tailExceedance({ baseline: cdfOf([]), production: cdfOf([1]), rank: 0.99, tail: "upper" }),
    ).toThrowError(expect.objectContaining({ code: "MOORLINE_INPUT_EMPTY_SAMPLE" }));
  });
});
