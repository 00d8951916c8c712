import { NumericSketch } from "@moorline/sketch";
import { describe, expect, test } from "vitest";
import { readPattern } from "../../src/reading/read-pattern.js";
import { FAMILIES, patternCase, TRUTHS } from "../kit/pattern-cases.js";

/** The measure in small (bench/measure-readings.ts has it in full): through real sketches, from another seed. */
const CASES = 10;
const BASELINE = 20_000;
const SEED = 31_007;

function sideOf(values: Float64Array, compression?: number) {
  const sketch = new NumericSketch(compression === undefined ? {} : { compression });
  sketch.addColumn(values);
  return { cdf: sketch.toCdf(), events: values.length, missing: 0, nonFinite: 0 };
}

describe("readPattern on simulated changes", () => {
  test.each([
    { m: 1_000, least: 0.92 },
    { m: 5_000, least: 0.96 },
  ])("readPattern is right in at least $least of the cases at m = $m", ({ m, least }) => {
    const wrong: string[] = [];
    for (const [t, truth] of TRUTHS.entries()) {
      for (let i = 0; i < CASES; i += 1) {
        const family = FAMILIES[i % FAMILIES.length]!;
        const { baseline, production } = patternCase(
          truth,
          family,
          m,
          SEED + 1_009 * t + 17 * i + m,
          BASELINE,
        );
        const { kind } = readPattern(sideOf(baseline, 500), sideOf(production));
        if (kind !== truth) wrong.push(`${truth} (${family}) read as ${kind}`);
      }
    }
    const right = 1 - wrong.length / (CASES * TRUTHS.length);
    expect(right, wrong.join("\n")).toBeGreaterThanOrEqual(least);
  });
});
