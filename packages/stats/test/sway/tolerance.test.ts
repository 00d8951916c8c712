import { describe, expect, test } from "vitest";
import { learnSway } from "../../src/sway/learn-sway.js";
import { Tolerance } from "../../src/sway/tolerance.js";
import { blocksOf, MINUTE_MS, NORMAL_THRESHOLDS, Random, wholeOf } from "../kit/grounds.js";

const MEDIAN = 5;
const EACH = 100;
const random = new Random(601);
const BLOCKS = blocksOf(400, EACH, NORMAL_THRESHOLDS, () => random.normal());
const SWAY = learnSway(BLOCKS)!;
const baseline = wholeOf(BLOCKS);
const at = (windowMs: number, sway = SWAY) => new Tolerance({ baseline, sway, windowMs });

describe("Tolerance", () => {
  test("effective takes dependence and the baseline's own error off: M = 1/(D/m + D/n)", () => {
    const tolerance = at(MINUTE_MS);
    const d = tolerance.designEffect(MEDIAN, 1, EACH);
    const longest = SWAY.effects[MEDIAN]!.effects.at(-1)!;
    expect(tolerance.effective(MEDIAN, 1, EACH)).toBeCloseTo(1 / (d / EACH + longest / 40_000), 9);
    expect(tolerance.effective(MEDIAN, 1, 0)).toBe(0);
  });

  test("without blocks events are taken as independent, and the basis says so", () => {
    const tolerance = new Tolerance({ baseline, sway: null, windowMs: MINUTE_MS });
    expect(tolerance.basis).toBe("assumed");
    expect(tolerance.effective(MEDIAN, 3, 300)).toBeCloseTo((300 * 40_000) / 40_300, 9);
    expect([1, 8, 9].map((windows) => tolerance.knows(windows, EACH, MEDIAN))).toEqual([true, true, false]);
  });

  test("knows only stretches of which the baseline has seven, but always one window", () => {
    const minutes = at(MINUTE_MS);
    expect([1, 57, 58].map((windows) => minutes.knows(windows, EACH, MEDIAN))).toEqual([true, true, false]);
    const days = at(1_440 * MINUTE_MS);
    expect([1, 2].map((windows) => days.knows(windows, EACH, MEDIAN))).toEqual([true, false]);
  });

  test("windows shorter than a block take the block's design effect; longer than all that was measured, one in proportion", () => {
    expect(at(MINUTE_MS / 10).designEffect(MEDIAN, 1, 10)).toBe(SWAY.effects[MEDIAN]!.effects[0]);
    const longest = SWAY.effects[MEDIAN]!;
    expect(at(480 * MINUTE_MS).designEffect(MEDIAN, 1, 48_000)).toBeCloseTo(
      (longest.effects.at(-1)! * 480) / longest.spans.at(-1)!,
      9,
    );
  });

  test("a baseline that was thinned out has its excess grow with the events of a window", () => {
    const tolerance = at(MINUTE_MS);
    const usual = tolerance.designEffect(MEDIAN, 1, EACH);
    expect(tolerance.designEffect(MEDIAN, 1, 10 * EACH)).toBeCloseTo(1 + 10 * (usual - 1), 9);
    expect(tolerance.designEffect(MEDIAN, 1, EACH / 10)).toBe(usual);
  });

  test("blocks by rows are as long as their rows, whatever the time", () => {
    const sway = learnSway({ ...BLOCKS, lengthMs: null, startMs: null })!;
    const tolerance = at(MINUTE_MS, sway);
    expect(tolerance.basis).toBe("rows");
    expect(tolerance.knows(2, 57 * EACH, MEDIAN)).toBe(true);
    expect(tolerance.knows(2, 58 * EACH, MEDIAN)).toBe(false);
    expect(tolerance.designEffect(MEDIAN, 9, 2 * EACH)).toBe(SWAY.effects[MEDIAN]!.effects[1]);
  });

  test("a window of a day or more is held against the whole baseline, a shorter one against its hours", () => {
    const daily = blocksOf(
      480,
      50,
      NORMAL_THRESHOLDS,
      (block) => random.normal() + Math.sin((2 * Math.PI * block) / 48),
    );
    const blocks = { ...daily, lengthMs: 30 * MINUTE_MS };
    const sway = learnSway(blocks)!;
    const of = (hours: number) =>
      new Tolerance({ baseline: wholeOf(blocks), sway, windowMs: hours * 60 * MINUTE_MS });
    const expected = (hours: number, endHour: number) => of(hours).expected(MEDIAN, endHour * 60 * MINUTE_MS);
    expect(of(1).isSeasonal).toBe(true);
    expect(expected(1, 6)).toBeLessThan(0.25);
    expect(expected(1, 18)).toBeGreaterThan(0.75);
    expect(expected(12, 12)).toBeLessThan(0.35);
    expect(of(24).isSeasonal).toBe(false);
    expect(expected(24, 24)).toBeCloseTo(0.5, 1);
  });
});
