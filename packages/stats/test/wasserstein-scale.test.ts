import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { wassersteinScale } from "../src/wasserstein-scale.js";
import { Random } from "./kit/random.js";

const scaleOf = (sample: readonly number[]) => wassersteinScale(cdfOf(sample));
const repeat = (value: number, times: number) => Array.from({ length: times }, () => value);
const ramp = (length: number) => Array.from({ length }, (_, i) => i + 1);

describe("wassersteinScale(baseline)", () => {
  test("wassersteinScale of a large normal sample is its standard deviation within 3 %", () => {
    const sample = new Random(11).sample(20_000, (r) => 40 + 2.5 * r.normal());
    expect(scaleOf(sample)).toBeGreaterThan(2.5 * 0.97);
    expect(scaleOf(sample)).toBeLessThan(2.5 * 1.03);
  });

  test("wassersteinScale takes the outer ranges in turn when the inner ones have no width", () => {
    const sixty = [...repeat(0, 60), ...ramp(40)];
    expect(scaleOf(sixty)).toBeGreaterThan(0);
    // Ranks .25 to .75 and .05 to .95 are all 0; .99 is 2.01 by type 7.
    expect(scaleOf([...repeat(0, 97), 1, 2, 3])).toBeCloseTo(2.01 / 4.652, 10);
  });

  test("wassersteinScale leaves the heaviest value out when no range has a width", () => {
    expect(scaleOf([...repeat(0, 1000), 1, 2, 3, 4, 5])).toBeCloseTo(2 / 1.349, 12);
  });

  test.each([
    { name: "nothing", sample: [] },
    { name: "one value", sample: [3] },
    { name: "equal values", sample: [2, 2, 2] },
    { name: "one value and a single other", sample: [...repeat(0, 1000), 7] },
    { name: "what differs by rounding only", sample: [1e9, 1e9 + 1e-7, 1e9 + 2e-7] },
  ])("wassersteinScale of $name is null: there is no scale", ({ sample }) => {
    expect(scaleOf(sample)).toBeNull();
  });

  test("wassersteinScale is proportional to scale and unmoved by shifts", () => {
    const sample = new Random(12).sample(500);
    const scale = scaleOf(sample)!;
    expect(scaleOf(sample.map((v) => 1000 * v))).toBeCloseTo(1000 * scale, 8);
    expect(scaleOf(sample.map((v) => v + 64))).toBeCloseTo(scale, 10);
  });

  test("wassersteinScale stays finite at the ends of the doubles", () => {
    expect(scaleOf([-Number.MAX_VALUE, Number.MAX_VALUE, -Number.MAX_VALUE, Number.MAX_VALUE])).toBe(
      Number.MAX_VALUE,
    );
  });
});
