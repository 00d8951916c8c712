import { describe, expect, test } from "vitest";
import { compareNumeric } from "../../src/compare-numeric.js";
import { compareVerdict } from "../../src/decision/compare-verdict.js";
import { DEFAULT_DECISION_RULE } from "../../src/decision/decision-rule.js";
import { numericSideOf } from "../../src/numeric-side.js";
import { Random } from "../kit/random.js";
import { evenSample, WINDOWS } from "../kit/windows.js";

describe("compareVerdict(comparison)", () => {
  test("compareVerdict of the same distribution is holding and says n", () => {
    expect(compareVerdict(WINDOWS.same())).toEqual({
      state: "holding",
      place: null,
      sentence: "within tolerance at every threshold; n = 1,000 against 20,000 in the baseline",
    });
  });

  test("compareVerdict of three times the values above p99 is adrift in the upper tail, in plain words", () => {
    const verdict = compareVerdict(WINDOWS.heavyUpperTail());
    expect(verdict).toMatchObject({ state: "adrift", place: { part: "upper tail", direction: "heavier" } });
    expect(verdict.sentence).toMatch(
      /^upper tail heavier: [\d.]+ % of values lie above the baseline's p99(\.9)? \([\d.]+\), [\d.]+ times the baseline's [\d.]+ %; n = 1,000$/,
    );
  });

  test.each([
    { name: "heavyLowerTail", part: "lower tail", direction: "heavier" },
    { name: "muchHigher", part: "body", direction: "higher" },
    { name: "tenthMissing", part: "missing", direction: "more" },
  ] as const)("compareVerdict of $name is adrift: $part $direction", ({ name, part, direction }) => {
    const verdict = compareVerdict(WINDOWS[name]());
    expect(verdict.state).toBe("adrift");
    expect(verdict.place).toMatchObject({ part, direction });
  });

  test("compareVerdict is straining where the floor is passed and the band is not left", () => {
    const verdict = compareVerdict(WINDOWS.slightlyHigher());
    expect(verdict).toMatchObject({ state: "straining", place: { part: "body", direction: "higher" } });
    expect(Math.abs(verdict.place!.z)).toBeLessThan(4.1);
    expect(Math.abs(verdict.place!.difference)).toBeGreaterThanOrEqual(0.05);
  });

  test("compareVerdict is straining where the band is left by less than the floor: a small shift of very many values", () => {
    const a = numericSideOf(evenSample(200_000));
    const b = numericSideOf(evenSample(200_000, (v) => v + 0.08));
    const verdict = compareVerdict(compareNumeric(a, b));
    expect(verdict.state).toBe("straining");
    expect(Math.abs(verdict.place!.z)).toBeGreaterThan(4.1);
    expect(Math.abs(verdict.place!.difference)).toBeLessThan(0.05);
  });

  test.each(["fewValues", "nothing"] as const)("compareVerdict of %s is thin and says how few", (name) => {
    const verdict = compareVerdict(WINDOWS[name]());
    expect(verdict.state).toBe("thin");
    expect(verdict.sentence).toMatch(/^too few values to tell: (n = 20 against 20,000|production has no)/);
  });

  test("compareVerdict says what is plain even from few values: 30 against 30 that do not overlap are adrift", () => {
    const ramp = Array.from({ length: 30 }, (_, i) => i);
    const comparison = compareNumeric(numericSideOf(ramp), numericSideOf(ramp.map((v) => v + 100)));
    expect(compareVerdict(comparison).state).toBe("adrift");
  });

  test("compareVerdict of a constant feature that took another value is adrift", () => {
    const constant = (value: number) => numericSideOf(Array.from({ length: 500 }, () => value));
    expect(compareVerdict(compareNumeric(constant(0), constant(1)))).toMatchObject({
      state: "adrift",
      place: { direction: "higher" },
    });
    expect(compareVerdict(compareNumeric(constant(0), constant(0))).state).toBe("holding");
  });

  test("compareVerdict sees a zero share that grew where no quantile moved: 30 to 45 % zeros of a binary feature", () => {
    const zeros = (share: number) =>
      numericSideOf(Array.from({ length: 1000 }, (_, i) => (i < share * 1000 ? 0 : 1)));
    const verdict = compareVerdict(compareNumeric(zeros(0.3), zeros(0.45)));
    expect(verdict).toMatchObject({
      state: "adrift",
      place: { part: "body", rank: 0.25, direction: "lower" },
    });
    expect(compareVerdict(compareNumeric(zeros(0.3), zeros(0.31))).state).toBe("holding");
  });

  test("compareVerdict calls at most 2 of 600 pairs of equal distributions adrift and 5 % straining", () => {
    const random = new Random(81);
    const states = Array.from({ length: 600 }, () => {
      const a = numericSideOf(random.sample(1000));
      const b = numericSideOf(random.sample(1000));
      return compareVerdict(compareNumeric(a, b)).state;
    });
    expect(states.filter((s) => s === "adrift").length).toBeLessThanOrEqual(2);
    expect(states.filter((s) => s === "straining").length).toBeLessThanOrEqual(30);
    expect(states).not.toContain("thin");
  });

  test("compareVerdict keeps to the rule it is given", () => {
    const deaf = { ...DEFAULT_DECISION_RULE, bodyFloor: 0.9, tailFactor: 1e6, tailLighterFactor: 0 };
    expect(compareVerdict(WINDOWS.muchHigher(), deaf).state).toBe("straining");
  });
});
