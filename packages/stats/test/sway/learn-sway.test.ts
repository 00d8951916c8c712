import { describe, expect, test } from "vitest";
import type { BlockCounts } from "../../src/sway/block-counts.js";
import { blockVariance } from "../../src/sway/block-variance.js";
import { designEffectAt, designEffects, spansUpTo } from "../../src/sway/design-effects.js";
import { profileShare } from "../../src/sway/hour-profile.js";
import { learnSway } from "../../src/sway/learn-sway.js";
import { autoregressive, blocksOf, MINUTE_MS, NORMAL_THRESHOLDS, Random } from "../kit/grounds.js";

const MEDIAN = 5;
const EACH = 100;

describe("blockVariance(input)", () => {
  test("blockVariance is the mean squared deviation over that of independent events, worked by hand", () => {
    // Shares .3 and .7 of ten events each around .5: (.2² / .25) · 10 = 1.6.
    const [both] = blockVariance({ hits: [3, 7], totals: [10, 10], expected: () => 0.5, span: 1 });
    expect(both!.ratio).toBeCloseTo(1.6, 12);
    expect(both!.runs).toBe(2);
    const [pooled] = blockVariance({ hits: [3, 7, 9], totals: [10, 10, 10], expected: () => 0.5, span: 2 });
    expect(pooled).toEqual({ ratio: 0, runs: 1 });
  });

  test("blockVariance leaves out runs without events, and keeps groups apart", () => {
    const groups = blockVariance({
      hits: [3, 0, 7, 5],
      totals: [10, 0, 10, 10],
      expected: () => 0.5,
      span: 1,
      groups: 2,
      groupOf: (block) => Number(block === 3),
    });
    expect(groups.map(({ runs }) => runs)).toEqual([2, 1]);
    expect(groups[1]!.ratio).toBe(0);
  });
});

describe("designEffects(measured)", () => {
  test("designEffects are upper limits, never below 1, and never fall with scale", () => {
    const { effects } = designEffects([
      { span: 1, ratio: 0.5, degrees: 999 },
      { span: 2, ratio: 9, degrees: 499 },
      { span: 4, ratio: 1, degrees: 249 },
    ]);
    // χ²(.05; 499) = 448.2 (R: qchisq(.05, 499)), so that 9 · 499/448.2 = 10.02.
    expect(effects).toEqual([1, expect.closeTo(10.02, 2), expect.closeTo(10.02, 2)]);
  });

  test("designEffectAt takes the next longer span, and grows in proportion beyond the longest", () => {
    const known = { spans: [1, 2, 4], effects: [1, 2, 5] };
    expect([0.2, 1, 1.5, 2, 3, 4, 8].map((span) => designEffectAt(known, span))).toEqual([
      1, 1, 2, 2, 5, 5, 10,
    ]);
  });

  test("spansUpTo goes on by halves and doubles", () => {
    expect(spansUpTo(0.5)).toEqual([1]);
    expect(spansUpTo(13)).toEqual([1, 2, 3, 4, 6, 8, 12]);
  });
});

describe("learnSway(blocks)", () => {
  test("learnSway of independent values finds no more than the upper limit of chance", () => {
    const random = new Random(501);
    const sway = learnSway(blocksOf(1_000, EACH, NORMAL_THRESHOLDS, () => random.normal()))!;
    expect(sway).toMatchObject({ basis: "time", blocks: 1_000, lengthMs: MINUTE_MS, seasonal: null });
    // 95 % limits of one: 999·/χ² = 1.08 at single blocks, some more where few are left.
    expect(sway.effects[MEDIAN]!.effects[0]).toBeLessThan(1.2);
    expect(sway.meanTotals[MEDIAN]).toBe(EACH);
  });

  test("learnSway of an AR(.9) feature finds its design effect", () => {
    const sway = learnSway(blocksOf(2_000, EACH, NORMAL_THRESHOLDS, autoregressive(0.9, new Random(502))))!;
    // Σ over lags of the correlation of {Y ≤ 0}: (2/π)·asin(.9^|k|), summed within 100 values: 12.3.
    const within = Array.from({ length: EACH - 1 }, (_, i) => i + 1).reduce(
      (sum, lag) => sum + 2 * (1 - lag / EACH) * (2 / Math.PI) * Math.asin(0.9 ** lag),
      1,
    );
    expect(sway.effects[MEDIAN]!.effects[0]).toBeGreaterThan(within * 0.95);
    expect(sway.effects[MEDIAN]!.effects[0]).toBeLessThan(within * 1.25);
  });

  const daily = (days: number, amplitude: number, seed: number): BlockCounts => {
    const random = new Random(seed);
    const blocks = blocksOf(
      days * 48,
      50,
      NORMAL_THRESHOLDS,
      (block) => random.normal() + amplitude * Math.sin((2 * Math.PI * (block + 0.5)) / 48),
    );
    return { ...blocks, lengthMs: 30 * MINUTE_MS };
  };

  test("learnSway follows the hour of the day where the feature does, and only there", () => {
    const seasonal = learnSway(daily(10, 0.8, 503))!.seasonal!;
    const share = (hour: number) =>
      profileShare(seasonal.profile, MEDIAN, hour * 60 * MINUTE_MS, (hour * 60 + 5) * MINUTE_MS);
    // Highest at 6 h, lowest at 18 h: Φ(−.8) = .212 of the values lie below the median threshold at 6 h.
    expect(share(6)).toBeCloseTo(0.212, 1);
    expect(share(18)).toBeCloseTo(0.788, 1);
    expect(learnSway(daily(10, 0, 504))!.seasonal).toBeNull();
  });

  test("learnSway asks for seven days before it follows the hour", () => {
    expect(learnSway(daily(6, 0.8, 505))!.seasonal).toBeNull();
    expect(learnSway(daily(7, 0.8, 505))!.seasonal).not.toBeNull();
  });

  test("learnSway lets what differs between days count as many times as there are days", () => {
    const random = new Random(506);
    const levels = Array.from({ length: 10 }, () => 0.3 * random.normal());
    const blocks = blocksOf(
      480,
      50,
      NORMAL_THRESHOLDS,
      (block) => random.normal() + levels[Math.floor(block / 48)]!,
    );
    const few = learnSway({ ...blocks, lengthMs: 30 * MINUTE_MS })!.effects[MEDIAN]!;
    const many = learnSway(blocks)!.effects[MEDIAN]!;
    expect(designEffectAt(few, 16)).toBeGreaterThan(designEffectAt(many, 16) * 1.3);
  });

  test.each([
    { name: "no block", blocks: blocksOf(0, EACH, NORMAL_THRESHOLDS, () => 0) },
    { name: "one block", blocks: blocksOf(1, EACH, NORMAL_THRESHOLDS, () => 0) },
    {
      name: "one block with events among empty ones",
      blocks: { ...blocksOf(3, 0, NORMAL_THRESHOLDS, () => 0), events: [0, 5, 0] },
    },
  ])("learnSway of $name is null", ({ blocks }) => {
    expect(learnSway(blocks)).toBeNull();
  });

  test("learnSway of a feature without a finite value, or with one value, is finite throughout", () => {
    const random = new Random(507);
    for (const draw of [() => null, () => 3, () => (random.uniform() < 0.5 ? null : 3)]) {
      const sway = learnSway(blocksOf(50, 20, NORMAL_THRESHOLDS, draw))!;
      for (const { effects } of sway.effects)
        for (const effect of effects) expect(Number.isFinite(effect) && effect >= 1).toBe(true);
    }
  });
});
