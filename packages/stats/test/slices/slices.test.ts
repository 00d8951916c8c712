import { NumericSketch } from "@moorline/sketch";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../../src/cdf-of.js";
import { sliceContributions } from "../../src/slices/slice-contributions.js";
import { type SliceSides, splitDistance } from "../../src/slices/split-distance.js";
import { splitExceedance } from "../../src/slices/split-exceedance.js";
import { wasserstein1 } from "../../src/wasserstein1.js";
import { Random } from "../kit/random.js";
import { SLICE_CHANGES, sliceCase } from "../kit/slice-cases.js";

const sides = (slice: string, baseline: readonly number[], production: readonly number[]): SliceSides => ({
  slice,
  baseline: cdfOf(baseline),
  production: cdfOf(production),
});
const sumOf = (parts: readonly { within: number; mix: number }[]) =>
  parts.reduce((sum, { within, mix }) => sum + within + mix, 0);

describe("splitDistance(slices)", () => {
  test("splitDistance worked by hand: one slice moved by 1, the other not, equal weights", () => {
    const { distance, parts } = splitDistance([sides("a", [0, 0], [1, 1]), sides("b", [5, 5], [5, 5])]);
    expect(distance).toBeCloseTo(0.5, 12);
    expect(parts[0]).toEqual({ within: 0.5, mix: 0 });
    expect(parts[1]).toEqual({ within: 0, mix: 0 });
  });

  test("splitDistance puts a change of traffic into mix: nothing changed within", () => {
    const { distance, parts } = splitDistance([sides("a", [0, 0], [0]), sides("b", [4, 4], [4, 4, 4])]);
    // A quarter of the mass moved from 0 to 4.
    expect(distance).toBeCloseTo(1, 12);
    expect(parts.map(({ within }) => within)).toEqual([0, 0]);
    expect(sumOf(parts)).toBeCloseTo(1, 12);
  });

  test("splitDistance sums to the Wasserstein distance of the pooled samples within 1e-12, on any slices", () => {
    const random = new Random(1_401);
    for (let round = 0; round < 60; round += 1) {
      const slices = Array.from({ length: 1 + Math.floor(6 * random.uniform()) }, (_, s) =>
        sides(
          `${s}`,
          random.sample(Math.floor(30 * random.uniform()), (r) => Math.round(8 * r.normal()) / 4),
          random.sample(1 + Math.floor(30 * random.uniform()), (r) => 0.5 + Math.round(9 * r.normal()) / 4),
        ),
      );
      if (slices.every(({ baseline }) => baseline.n === 0)) continue;
      const pooled = (
        of: (one: SliceSides) => { values: Float64Array; below: Float64Array; upTo: Float64Array },
      ) =>
        cdfOf(
          slices.flatMap((one) => {
            const { values, below, upTo } = of(one);
            return [...values].flatMap((value, i) => Array(upTo[i]! - below[i]!).fill(value));
          }),
        );
      const { distance, parts } = splitDistance(slices);
      const truth = wasserstein1(
        pooled((one) => one.baseline),
        pooled((one) => one.production),
      );
      expect(Math.abs(distance - truth)).toBeLessThanOrEqual(1e-12 * truth);
      expect(Math.abs(sumOf(parts) - distance)).toBeLessThanOrEqual(1e-12 * distance);
      for (const { within, mix } of parts) expect(Number.isFinite(within) && Number.isFinite(mix)).toBe(true);
    }
  });
});

describe("splitExceedance(slices, threshold)", () => {
  test("splitExceedance sums to the change of the whole, within and mix apart", () => {
    const slices = [sides("a", [0, 0, 9, 0], [0, 9, 9, 9]), sides("b", [1, 2], [1, 2, 3, 4])];
    const { change, parts } = splitExceedance(slices, 8);
    // One of six before, three of eight now.
    expect(change).toBeCloseTo(3 / 8 - 1 / 6, 12);
    expect(sumOf(parts)).toBeCloseTo(change, 12);
    expect(parts[0]!.within).toBeCloseTo(((4 / 6 + 4 / 8) / 2) * (3 / 4 - 1 / 4), 12);
    expect(parts[1]!.within).toBe(0);
  });
});

describe("sliceContributions(slices)", () => {
  const random = new Random(1_402);
  const normal = (n: number, shift = 0) => random.sample(n, (r) => shift + r.normal());

  test("sliceContributions names the slice that carries the change, with n", () => {
    const answer = sliceContributions([
      sides("depot=north", normal(2_000), normal(700, 2)),
      sides("depot=south", normal(2_000), normal(700)),
    ]);
    expect(answer.slices[0]).toMatchObject({ slice: "depot=north", n: { baseline: 2_000, production: 700 } });
    expect(answer.slices[0]!.share).toBeGreaterThan(0.9);
    expect(sumOf(answer.slices.map(({ wasserstein }) => wasserstein))).toBeCloseTo(answer.distance, 12);
    expect(answer.sentence).toMatch(
      /^depot=north carries (9\d\.\d|10\d\.\d) % of the change; no other stands out; n = 700 against 2,000$/,
    );
    const { upper } = answer.slices[0]!.exceedance;
    expect(upper.within).toBeGreaterThan(0.1);
  });

  test("sliceContributions says that the traffic changed where only that did", () => {
    const answer = sliceContributions([
      sides("depot=north", normal(2_000, 3), normal(900, 3)),
      sides("depot=south", normal(2_000), normal(300)),
    ]);
    expect(answer.sentence).toMatch(
      /^the traffic changed: depot=(north|south) is [\d.]+ % of the events, 50\.0 % in the baseline; no slice changed by itself/,
    );
  });

  test("sliceContributions of nothing that changed says that no slice stands out", () => {
    const answer = sliceContributions([
      sides("a", normal(2_000), normal(500)),
      sides("b", normal(2_000), normal(500)),
    ]);
    expect(answer.sentence).toBe("no slice stands out");
    expect(answer.critical).toBeGreaterThanOrEqual(4);
  });

  test("sliceContributions takes a slice that a side lacks as the whole, and the sum stays exact", () => {
    const answer = sliceContributions([
      sides("new", [], normal(300, 2)),
      sides("gone", normal(300, -1), []),
      sides("old", normal(2_000), normal(700)),
    ]);
    expect(sumOf(answer.slices.map(({ wasserstein }) => wasserstein))).toBeCloseTo(answer.distance, 12);
    expect(answer.slices.find(({ slice }) => slice === "new")).toMatchObject({
      z: null,
      weight: { baseline: 0 },
    });
    expect(JSON.parse(JSON.stringify(answer))).toEqual(answer);
  });

  test("sliceContributions divides the evidence by the design effect", () => {
    const slices = [sides("a", normal(3_000), normal(800, 0.4)), sides("b", normal(3_000), normal(800))];
    const z = (designEffect: number) =>
      sliceContributions(slices, { designEffect }).slices.find(({ slice }) => slice === "a")!.z!;
    expect(z(4)).toBeCloseTo(z(1) / 2, 6);
    expect(sliceContributions(slices, { designEffect: 50 }).sentence).toBe("no slice stands out");
  });

  test.each(SLICE_CHANGES)(
    "sliceContributions names the guilty slice first in simulated cases through sketches: %s",
    (change) => {
      const CASES = 20;
      const viewOf = (values: readonly number[], compression: number) => {
        const sketch = new NumericSketch({ compression });
        sketch.addColumn(Float64Array.from(values));
        return sketch.toCdf();
      };
      const first = Array.from({ length: CASES }, (_, i) => {
        const { slices, guilty } = sliceCase(change, 10_000, 10_000, 5_000 + 97 * i);
        const answer = sliceContributions(
          slices.map(({ slice, baseline, production }) => ({
            slice,
            baseline: viewOf(baseline, 500),
            production: viewOf(production, 200),
          })),
        );
        expect(
          Math.abs(sumOf(answer.slices.map((one) => one.wasserstein)) - answer.distance),
        ).toBeLessThanOrEqual(1e-12 * answer.distance);
        return answer.slices[0]!.slice === guilty;
      }).filter(Boolean).length;
      expect(first).toBeGreaterThanOrEqual(CASES - 2);
    },
  );
});
