import { describe, expect, test } from "vitest";
import { cdfOf } from "../../src/cdf-of.js";
import { decileBins } from "../../src/decile-bins.js";
import { jensenShannonNoise, populationStabilityNoise } from "../../src/noise/chance-level.js";
import { jensenShannonDistance, populationStabilityIndex } from "../../src/population-stability.js";
import { Random } from "../kit/random.js";

describe("populationStabilityNoise and jensenShannonNoise", () => {
  test("are the mean and the upper percents of both indices over 600 draws without a change", () => {
    const random = new Random(8401);
    const baseline = cdfOf(random.sample(20_000));
    const m = 500;
    const draws = Array.from({ length: 600 }, () => decileBins(baseline, cdfOf(random.sample(m))));
    for (const [index, noise] of [
      [populationStabilityIndex, populationStabilityNoise({ bins: 10, n: 20_000, m })],
      [jensenShannonDistance, jensenShannonNoise({ bins: 10, n: 20_000, m })],
    ] as const) {
      const values = draws.map(index);
      const mean = values.reduce((a, b) => a + b, 0) / values.length;
      expect(mean / noise.expected).toBeGreaterThan(0.93);
      expect(mean / noise.expected).toBeLessThan(1.07);
      const share = (limit: number) => values.filter((v) => v > limit).length / values.length;
      expect(share(noise.upper95)).toBeGreaterThan(0.025);
      expect(share(noise.upper95)).toBeLessThan(0.075);
      expect(share(noise.upper99)).toBeLessThan(0.025);
    }
  });

  test("PSI noise is (bins − 1)(1/n + 1/m)·D, Jensen–Shannon's grows with √D", () => {
    const input = { bins: 10, n: 1000, m: 200 };
    expect(populationStabilityNoise({ ...input, designEffect: 3 }).expected).toBeCloseTo(9 * 0.006 * 3, 12);
    const ratio =
      jensenShannonNoise({ ...input, designEffect: 4 }).expected / jensenShannonNoise(input).expected;
    expect(ratio).toBeCloseTo(2, 12);
  });

  test("one bin → 0; a distance is never above 1; a side without events → INPUT error", () => {
    expect(jensenShannonNoise({ bins: 1, n: 1, m: 1 })).toEqual({ expected: 0, upper95: 0, upper99: 0 });
    expect(jensenShannonNoise({ bins: 5000, n: 10, m: 10 }).upper99).toBe(1);
    expect(() => populationStabilityNoise({ bins: 3, n: 0, m: 10 })).toThrow("the number of events is 0");
  });
});
