import { describe, expect, test } from "vitest";
import { compareNumeric } from "../src/compare-numeric.js";
import { type Decision, decide } from "../src/decide.js";
import type { DecisionMemory } from "../src/decision-memory.js";
import { DEFAULT_DECISION_RULE, type DecisionRule } from "../src/decision-rule.js";
import type { NumericComparison } from "../src/numeric-comparison.js";
import { numericSideOf } from "../src/numeric-side.js";
import { Random } from "./kit/random.js";
import { evenSample, WINDOWS, windowOf } from "./kit/windows.js";

const MINUTE_MS = 60_000;

/** Runs windows through the decision, one a minute, with the memory going through JSON as it does in the store. */
function run(windows: readonly NumericComparison[], rule: DecisionRule = DEFAULT_DECISION_RULE): Decision[] {
  let memory: DecisionMemory | null = null;
  return windows.map((comparison, i) => {
    const decision = decide(memory, comparison, rule, (i + 1) * MINUTE_MS);
    memory = JSON.parse(JSON.stringify(decision.memory));
    return decision;
  });
}

const { same, slightlyHigher, slightlyLower, heavyUpperTail, slightlyHeavyUpperTail, muchHigher } = WINDOWS;
const repeat = (window: () => NumericComparison, times: number) => Array.from({ length: times }, window);
const states = (windows: readonly NumericComparison[], rule?: DecisionRule) =>
  run(windows, rule).map((d) => d.state);

describe("decide(memory, comparison, rule, windowEndMs)", () => {
  test("decide holds while windows are within tolerance", () => {
    expect(states(repeat(same, 5))).toEqual(Array(5).fill("holding"));
  });

  test("decide strains at once and is adrift when three or more windows in a row are beyond and their pooled z reaches 6.5", () => {
    const decisions = run(repeat(slightlyHeavyUpperTail, 4));
    expect(decisions.map((d) => d.state)).toEqual(["straining", "straining", "straining", "adrift"]);
    // Three windows pool to less than 6.5, so that the fourth decides; each by itself is far below.
    const zs = decisions.map((d) => Math.abs(d.place!.z));
    expect(zs[2]).toBeLessThan(6.5);
    expect(zs[3]).toBeGreaterThanOrEqual(6.5);
    expect(decisions[3]!.place).toMatchObject({ part: "upper tail", rank: 0.99, direction: "heavier" });
  });

  test("decide names the place with its figures and how long it has been beyond", () => {
    const last = run(repeat(slightlyHeavyUpperTail, 4)).at(-1)!;
    expect(last.sentence).toBe(
      "upper tail heavier: 2.5 % of values lie above the baseline's p99 (4.593), 2.5 times the baseline's 1.0 %; " +
        "n = 1,000; beyond tolerance for 4 windows in a row",
    );
    expect(last.place!.ratio).toBeCloseTo(2.5, 1);
  });

  test("decide shows straining only from the 95 % band on, while the streak counts from |z| of 2", () => {
    // 1.9 % beyond p99: z of about −2.4 a window, −3.3 in two.
    const window = () => windowOf(evenSample(1000, (v, rank) => (rank > 0.9815 && rank < 0.9985 ? 4.9 : v)));
    const decisions = run(repeat(window, 3));
    expect(decisions.map((d) => d.state)).toEqual(["holding", "straining", "straining"]);
    expect(decisions[0]).toMatchObject({ place: null, memory: { streaks: [{ key: "p0.99", windows: 1 }] } });
    expect(decisions[2]!.memory.streaks[0]!.windows).toBe(3);
  });

  test("decide never calls 500 windows of the baseline's own distribution adrift, and at most 4 % of them straining", () => {
    const random = new Random(85);
    const baseline = numericSideOf(random.sample(20_000));
    const seen = states(
      Array.from({ length: 500 }, () => compareNumeric(baseline, numericSideOf(random.sample(500)))),
    );
    expect(seen).not.toContain("adrift");
    expect(seen.filter((s) => s === "straining").length).toBeLessThanOrEqual(20);
  });

  test("decide never goes adrift before `persistence` windows, however far the pooled z, unless one is far enough at once", () => {
    const rule = { ...DEFAULT_DECISION_RULE, zPage: 2.5, zAtOnce: 99 };
    expect(states(repeat(heavyUpperTail, 4), rule)).toEqual(["straining", "straining", "adrift", "adrift"]);
    expect(states(repeat(heavyUpperTail, 4), { ...rule, persistence: 4 })[2]).toBe("straining");
  });

  test("decide is adrift at once when the body moves by .15 with |z| over 10", () => {
    expect(states([same(), muchHigher()])).toEqual(["holding", "adrift"]);
  });

  test("decide lets the streak go when a window is back within tolerance", () => {
    const windows = [...repeat(slightlyHeavyUpperTail, 3), same(), ...repeat(slightlyHeavyUpperTail, 3)];
    expect(states(windows)).toEqual([
      ...Array(3).fill("straining"),
      "holding",
      ...Array(3).fill("straining"),
    ]);
  });

  test("decide starts a streak anew when the direction turns", () => {
    const rule = { ...DEFAULT_DECISION_RULE, zPage: 2.5 };
    const windows = [slightlyHigher(), slightlyHigher(), slightlyLower(), slightlyLower(), slightlyLower()];
    expect(states(windows, rule)).toEqual(["straining", "straining", "straining", "straining", "adrift"]);
    const last = run(windows, rule).at(-1)!;
    expect(last.place).toMatchObject({ part: "body", direction: "lower" });
    expect(last.memory.streaks.every((s) => s.windows === 3 && s.sinceMs === 3 * MINUTE_MS)).toBe(true);
  });

  test("decide stays adrift until three windows in a row are within tolerance", () => {
    const windows = [muchHigher(), same(), same(), slightlyHigher(), same(), same(), same(), same()];
    const decisions = run(windows);
    expect(decisions.map((d) => d.state)).toEqual([...Array(6).fill("adrift"), "holding", "holding"]);
    expect(decisions[1]!.sentence).toBe(
      "still adrift: 1 of 3 windows back within tolerance; within tolerance at every threshold; n = 1,000 against 20,000 in the baseline",
    );
    expect(decisions[1]!.place).toEqual(decisions[0]!.place);
    expect(decisions[6]!.place).toBeNull();
  });

  test("decide keeps since when a state has lasted", () => {
    const decisions = run([same(), same(), muchHigher(), muchHigher(), same(), same(), same()]);
    expect(decisions.map((d) => d.memory.sinceMs! / MINUTE_MS)).toEqual([1, 1, 3, 3, 3, 3, 7]);
  });

  test.each(["fewValues", "nothing"] as const)(
    "decide calls %s thin, which neither advances nor clears a streak",
    (name) => {
      const thin = WINDOWS[name]();
      const windows = [
        slightlyHeavyUpperTail(),
        slightlyHeavyUpperTail(),
        thin,
        slightlyHeavyUpperTail(),
        slightlyHeavyUpperTail(),
      ];
      const decisions = run(windows);
      expect(decisions.map((d) => d.state)).toEqual([
        "straining",
        "straining",
        "thin",
        "straining",
        "adrift",
      ]);
      expect(decisions[2]!.memory.streaks).toEqual(decisions[1]!.memory.streaks);
      expect(decisions[2]!.place).toBeNull();
    },
  );

  test("decide does not let a thin window end adrift", () => {
    const decisions = run([
      muchHigher(),
      WINDOWS.nothing(),
      WINDOWS.nothing(),
      WINDOWS.nothing(),
      WINDOWS.nothing(),
    ]);
    expect(decisions.map((d) => d.state)).toEqual(Array(5).fill("adrift"));
    expect(decisions[4]!.sentence).toBe(
      "still adrift, for this window cannot tell; too few values to tell: production has no finite value",
    );
  });

  test("decide judges missing values also where no value is left to compare", () => {
    const decisions = run([same(), WINDOWS.allMissing()]);
    expect(decisions[1]).toMatchObject({
      state: "adrift",
      place: { part: "missing", direction: "more", rank: null },
    });
    expect(decisions[1]!.sentence).toContain("more missing values: 100.0 % of events carry no value");
  });

  test("decide sees a tenth of the events missing within three windows", () => {
    const decisions = run(repeat(WINDOWS.tenthMissing, 3));
    expect(decisions.map((d) => d.state)).toContain("adrift");
    expect(decisions[2]!.place!.part).toBe("missing");
  });

  test("decide with a design effect of 25 has z a fifth as large and stays calm where it would strain", () => {
    const rule = { ...DEFAULT_DECISION_RULE, designEffect: 25 };
    expect(states([slightlyHigher()], rule)).toEqual(["holding"]);
    expect(states([slightlyHigher()])).toEqual(["straining"]);
  });

  test("decide is pure: the same arguments give the same decision and leave the memory as it was", () => {
    const memory = Object.freeze(run([slightlyHigher()])[0]!.memory);
    const copy = JSON.stringify(memory);
    const comparison = slightlyHigher();
    expect(decide(memory, comparison)).toEqual(decide(memory, comparison));
    expect(JSON.stringify(memory)).toBe(copy);
  });

  test("decide keeps its memory below 6 kB after 500 windows beyond tolerance", () => {
    const last = run(repeat(muchHigher, 500)).at(-1)!;
    expect(JSON.stringify(last.memory).length).toBeLessThan(6000);
    expect(Math.max(...last.memory.streaks.map((s) => s.windows))).toBe(500);
  });
});
