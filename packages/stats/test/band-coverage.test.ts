import { NumericSketch } from "@moorline/sketch";
import { describe, expect, test } from "vitest";
import type { CdfView } from "../src/cdf-view.js";
import { type QuantilePairsOptions, quantilePairs } from "../src/quantile-pairs.js";
import { Random } from "./kit/random.js";

// A reduced size of bench/measure-coverage.mjs: through sketches that were encoded and decoded, as the product holds them.

const DRAWS = 150;

function sketched(values: readonly number[], compression: number): CdfView {
  const sketch = new NumericSketch({ compression });
  sketch.addColumn(Float64Array.from(values));
  return NumericSketch.decode(sketch.encode()).toCdf();
}

function holds(baseline: CdfView, production: CdfView, options: QuantilePairsOptions): boolean {
  return quantilePairs(baseline, production, options).every(
    ({ baseline: x, low, high }) =>
      x === null || ((low === null || x >= low) && (high === null || x <= high)),
  );
}

function autoregressive(random: Random, length: number): number[] {
  let level = random.normal();
  return Array.from({ length }, () => {
    level = 0.9 * level + Math.sqrt(0.19) * random.normal();
    return level;
  });
}

describe("the band's coverage through sketches", () => {
  test.each([
    { name: "normal", draw: (r: Random) => r.normal() },
    { name: "30 % zeros", draw: (r: Random) => (r.uniform() < 0.3 ? 0 : Math.exp(r.normal())) },
    { name: "rounded", draw: (r: Random) => Math.round(4 * r.normal()) / 4 },
  ])("quantilePairs hold the 95 % band when nothing changed: $name", ({ draw }) => {
    const random = new Random(341);
    let held = 0;
    for (let i = 0; i < DRAWS; i += 1) {
      const baseline = sketched(random.sample(10_000, draw), 500);
      if (holds(baseline, sketched(random.sample(500, draw), 200), { confidence: 0.95 })) held += 1;
    }
    expect(held / DRAWS).toBeGreaterThanOrEqual(0.95 - 2 * Math.sqrt((0.95 * 0.05) / DRAWS));
  });

  test("quantilePairs over an autoregressive stream hold the 95 % band with its design effect, and not without", () => {
    const random = new Random(342);
    // (1 + φ)/(1 − φ) is the design effect of the mean; that of a share is smaller.
    const held = { independent: 0, dependent: 0 };
    for (let i = 0; i < DRAWS; i += 1) {
      const baseline = sketched(random.sample(10_000), 500);
      const production = sketched(autoregressive(random, 1000), 200);
      if (holds(baseline, production, { confidence: 0.95 })) held.independent += 1;
      if (holds(baseline, production, { confidence: 0.95, designEffect: () => 19 })) held.dependent += 1;
    }
    expect(held.independent / DRAWS).toBeLessThan(0.6);
    expect(held.dependent / DRAWS).toBeGreaterThanOrEqual(0.95);
  });
});
