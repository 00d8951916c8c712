import { describe, expect, test } from "vitest";
import { clopperPearson } from "../../src/clopper-pearson.js";
import { numericSideOf } from "../../src/numeric-side.js";
import { tailDivergence } from "../../src/tail-divergence/tail-divergence.js";
import { Random } from "../kit/random.js";

const side = (seed: number, length: number, draw?: (r: Random) => number) =>
  numericSideOf(new Random(seed).sample(length, draw));

describe("tailDivergence(baseline, production, tail)", () => {
  test("tailDivergence reads p95, p99 and p99.9, each from the raw counts beyond the baseline's quantile", () => {
    const b = new Random(312).sample(4000, (r) => 1.4 * r.normal());
    const found = tailDivergence(side(311, 20_000), numericSideOf(b), "upper");
    expect(found.map((t) => t.rank)).toEqual([0.95, 0.99, 0.999]);
    for (const t of found) {
      const share = b.filter((v) => v > t.threshold!).length / 4000;
      expect(t.exceedance).toBe(share);
      expect(t.ratio).toBeCloseTo(share / t.expected!, 12);
      const trials = (20_000 * 4000) / 24_000;
      const [low, high] = clopperPearson(share * trials, trials);
      expect(t.interval![0]).toBeCloseTo(low / t.expected!, 9);
      expect(t.interval![1]).toBeCloseTo(high / t.expected!, 9);
      expect(t.interval![0]).toBeGreaterThan(1);
      expect(t.n).toEqual({ baseline: 20_000, production: 4000 });
      expect(t).not.toHaveProperty("beyondData");
    }
  });

  test("tailDivergence of the lower tail mirrors that of the upper", () => {
    const [a, b] = [new Random(313).sample(10_001), new Random(314).sample(3000)];
    const mirrored = (values: readonly number[]) => numericSideOf(values.map((v) => -v));
    const lower = tailDivergence(numericSideOf(a), numericSideOf(b), "lower");
    const upper = tailDivergence(mirrored(a), mirrored(b), "upper");
    expect(lower.map((t) => t.rank)).toEqual([0.05, 0.01, 0.001]);
    expect(lower.map((t) => t.exceedance)).toEqual(upper.map((t) => t.exceedance));
  });

  test("tailDivergence has no figures where the baseline has fewer than five values beyond, and says so", () => {
    const found = tailDivergence(side(315, 2000), side(316, 5000), "upper");
    expect(found.map((t) => t.beyondData)).toEqual([undefined, undefined, true]);
    expect(found[2]).toMatchObject({ threshold: null, exceedance: null, ratio: null, interval: null });
    expect(found[2]!.sentence).toBe("beyond p99.9 the baseline has too few values to tell: n = 2,000");
  });

  test("tailDivergence keeps the count where production expects less than one, marked, with an interval that says how little it proves", () => {
    const found = tailDivergence(side(317, 10_000), side(318, 50), "upper");
    expect(found.map((t) => t.beyondData)).toEqual([undefined, true, true]);
    expect(found[2]!.interval![1]).toBeGreaterThan(50);
  });

  test("tailDivergence with a design effect by rank widens the interval of that rank alone", () => {
    const [a, b] = [side(319, 20_000), side(320, 5000)];
    const plain = tailDivergence(a, b, "upper");
    const given = tailDivergence(a, b, "upper", { designEffect: (rank) => (rank === 0.99 ? 9 : 1) });
    expect([given[0], given[2]]).toEqual([plain[0], plain[2]]);
    expect(given[1]!.interval![0]).toBeLessThan(plain[1]!.interval![0]);
    expect(given[1]!.interval![1]).toBeGreaterThan(plain[1]!.interval![1]);
  });

  test("tailDivergence in words and numbers: heavier, lighter, no more than chance", () => {
    const ramp = numericSideOf(Array.from({ length: 10_000 }, (_, i) => i + 1));
    const beyond = (count: number) =>
      numericSideOf(Array.from({ length: 1000 }, (_, i) => (i < count ? 20_000 : 5)));
    const words = (count: number) => tailDivergence(ramp, beyond(count), "upper")[0]!.sentence;
    expect(words(100)).toBe(
      "10.0 % of values lie above the baseline's p95 (9,500.1), 2.0 times its 5.0 % (95 % interval 1.6 times to 2.4 times): heavier; n = 1,000",
    );
    expect(words(10)).toMatch(/0\.2 times its 5\.0 % .*: lighter; n = 1,000$/);
    expect(words(50)).toMatch(/1\.0 times .*: no more than chance; n = 1,000$/);
  });

  test("tailDivergence of one, two and equal values is finite or null, never NaN", () => {
    const sides = [[1], [1, 2], Array.from({ length: 6000 }, () => 7), [Number.MAX_VALUE, -Number.MAX_VALUE]];
    for (const a of sides)
      for (const b of sides)
        for (const tail of ["lower", "upper"] as const) {
          const found = tailDivergence(numericSideOf(a), numericSideOf(b), tail);
          expect(JSON.parse(JSON.stringify(found))).toEqual(found);
        }
  });

  test("tailDivergence's p99 interval holds for 93 to 99.5 % of 600 draws when nothing changed", () => {
    const random = new Random(321);
    let held = 0;
    for (let draw = 0; draw < 600; draw += 1) {
      const [a, b] = [random.sample(1000), random.sample(1000)];
      const [low, high] = tailDivergence(numericSideOf(a), numericSideOf(b), "upper")[1]!.interval!;
      if (low <= 1 && high >= 1) held += 1;
    }
    expect(held / 600).toBeGreaterThan(0.93);
    expect(held / 600).toBeLessThan(0.995);
  });
});
