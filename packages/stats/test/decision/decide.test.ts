import { describe, expect, test } from "vitest";
import { type Decision, type DecisionGround, decide } from "../../src/decision/decide.js";
import type { DecisionMemory } from "../../src/decision/decision-memory.js";
import type { DecisionRule } from "../../src/decision/decision-rule.js";
import { decisionSentence } from "../../src/decision/decision-sentence.js";
import { whyOf } from "../../src/decision/why.js";
import type { NumericComparison } from "../../src/numeric-comparison.js";
import {
  assumedGround,
  autoregressive,
  blocksOf,
  countsOf,
  groundOf,
  independentGround,
  judged,
  MINUTE_MS,
  NORMAL_THRESHOLDS,
  Random,
  RULE,
} from "../kit/grounds.js";
import { evenSample, WINDOWS, windowOf } from "../kit/windows.js";

/** Runs windows through the decision, one a minute, with the memory going through JSON as it does in the store. */
function run(windows: readonly NumericComparison[], ground: DecisionGround = assumedGround()): Decision[] {
  let memory: DecisionMemory | null = null;
  return windows.map((comparison, i) => {
    const decision = decide(memory, judged(comparison, (i + 1) * MINUTE_MS), ground);
    memory = JSON.parse(JSON.stringify(decision.memory));
    return decision;
  });
}

const { same, slightlyHigher, slightlyHeavyUpperTail, muchHigher } = WINDOWS;
const repeat = (window: () => NumericComparison, times: number) => Array.from({ length: times }, window);
const states = (windows: readonly NumericComparison[], rule?: DecisionRule) =>
  run(windows, assumedGround(rule)).map((d) => d.state);
const sentence = (decision: Decision, comparison: NumericComparison, ground = assumedGround()) =>
  decisionSentence(decision, judged(comparison, null).counts, ground);

describe("decide(memory, window, ground)", () => {
  test("decide holds while windows are within tolerance", () => {
    expect(states(repeat(same, 20))).toEqual(Array(20).fill("holding"));
  });

  test("decide pools longer and longer stretches: a tail two and a half times as heavy strains, then is adrift", () => {
    const decisions = run(repeat(slightlyHeavyUpperTail, 8), assumedGround({ ...RULE, zPage: 7 }));
    // Three windows pool to |z| = 6.5, six to 8.6.
    expect(decisions.map((d) => d.state)).toEqual([
      "holding",
      "holding",
      "straining",
      "straining",
      "straining",
      "adrift",
      "adrift",
      "adrift",
    ]);
    expect(decisions[2]!.evidence).toMatchObject({ scale: 1, blocks: 3, events: 3_000 });
    expect(decisions[5]!.evidence).toMatchObject({ scale: 2, blocks: 3, events: 6_000 });
    expect(decisions[5]!.memory.place).toMatchObject({
      part: "upper tail",
      rank: 0.99,
      direction: "heavier",
    });
    expect(decisions[5]!.memory.place!.ratio).toBeCloseTo(2.5, 1);
  });

  test("decisionSentence names the place with its figures, over how many windows, and how strong the evidence is", () => {
    const decisions = run(repeat(slightlyHeavyUpperTail, 6));
    expect(sentence(decisions[5]!, slightlyHeavyUpperTail())).toBe(
      "upper tail heavier: 2.5 % of values lie above the baseline's p99 (4.593), 2.5 times the baseline's 1.0 %; n = 6,000 over 6 windows; " +
        "|z| = 8.6, 6.5 is enough; the baseline has too few blocks: its events were taken as independent",
    );
  });

  test.each([
    {
      name: "straining in pools",
      windows: repeat(slightlyHeavyUpperTail, 3),
      zPage: 7,
      says: "|z| = 6.5 of the 7.0 that make it adrift",
    },
    {
      name: "straining in one window",
      windows: [muchHigher()],
      zPage: 30,
      says: "not yet in 3 windows on end",
    },
    { name: "adrift at once", windows: [muchHigher()], zPage: 6, says: ", far enough at once" },
  ])(
    "decisionSentence of a feature that is $name says how far it is from adrift",
    ({ windows, zPage, says }) => {
      const ground = assumedGround({
        ...RULE,
        zPage,
        ...(zPage === 30 && { zStrainBelow: 20, zAtOnce: 99 }),
      });
      const last = run(windows, ground).at(-1)!;
      expect(sentence(last, windows.at(-1)!, ground)).toContain(says);
    },
  );

  test("whyOf has the numbers behind it: tolerance, evidence, what was needed", () => {
    const ground = assumedGround();
    const decision = run(repeat(slightlyHeavyUpperTail, 6), ground)[5]!;
    const why = whyOf(decision, ground);
    expect(why).toMatchObject({
      tolerance: { basis: "assumed", seasonal: false },
      needed: { adrift: RULE.zPage, straining: RULE.zPage - 1 },
      evidence: { share: "p0.99", windows: 6, designEffect: 1, baselineItself: 0, observed: 0.975 },
    });
    expect(JSON.parse(JSON.stringify(why))).toEqual(why);
  });

  test("decide never goes adrift before `persistence` blocks, however far the pool, unless one window is far enough at once", () => {
    const rule = { ...RULE, zAtOnce: 99 };
    expect(states(repeat(muchHigher, 4), rule)).toEqual(["straining", "straining", "adrift", "adrift"]);
    expect(states(repeat(muchHigher, 4), { ...rule, persistence: 4 })).toEqual([
      "straining",
      "straining",
      "straining",
      "adrift",
    ]);
  });

  test("decide is adrift at once when the body moves by .15 with |z| over 10", () => {
    const decisions = run([same(), muchHigher()]);
    expect(decisions.map((d) => d.state)).toEqual(["holding", "adrift"]);
    expect(decisions[1]!.evidence).toMatchObject({ scale: 1, blocks: 1 });
  });

  test("decide asks for blocks that all point the same way: what comes and goes does not page", () => {
    const windows = Array.from({ length: 40 }, (_, i) => (i % 2 === 0 ? slightlyHeavyUpperTail() : same()));
    const decisions = run(windows, assumedGround({ ...RULE, zPage: 6, zStrainBelow: 0 }));
    // Single windows alternate; blocks of two and more windows are each half as far off, and agree.
    expect(decisions.slice(0, 5).map((d) => d.state)).toEqual(Array(5).fill("holding"));
    for (const { evidence } of decisions) expect(evidence === null || evidence.scale >= 2).toBe(true);
  });

  test("decide stays adrift until three windows in a row are within tolerance, and then holds", () => {
    const windows = [muchHigher(), ...repeat(same, 5)];
    const decisions = run(windows);
    expect(decisions.map((d) => d.state)).toEqual([
      "adrift",
      "adrift",
      "adrift",
      "holding",
      "holding",
      "holding",
    ]);
    expect(sentence(decisions[1]!, same())).toBe(
      "still adrift: 1 of 3 windows back within tolerance; within tolerance at every threshold; n = 1,000 against 20,000 in the baseline",
    );
    expect(decisions[1]!.memory.place).toEqual(decisions[0]!.memory.place);
    expect(decisions[3]!.memory.place).toBeNull();
  });

  test("decide does not end adrift while weaker evidence lasts: what paged at 6.4 is over below 4", () => {
    const weaker = () => windowOf(evenSample(1000, (v, rank) => (rank > 0.98 && rank < 0.9985 ? 4.9 : v)));
    const decisions = run([...repeat(slightlyHeavyUpperTail, 8), ...repeat(weaker, 30)]);
    expect(decisions.slice(5).map((d) => d.state)).toEqual(Array(33).fill("adrift"));
    expect(run(repeat(weaker, 5)).map((d) => d.state)).toEqual(Array(5).fill("holding"));
  });

  test("decide keeps since when a state has lasted", () => {
    const decisions = run([same(), same(), muchHigher(), muchHigher(), ...repeat(same, 6)]);
    const since = decisions.map((d) => d.memory.sinceMs! / MINUTE_MS);
    expect(since.slice(0, 4)).toEqual([1, 1, 3, 3]);
    const held = decisions.findIndex((d, i) => i > 3 && d.state === "holding");
    expect(since[held]).toBe(held + 1);
  });

  test("decide begins its history anew after a gap, and keeps its state", () => {
    const ground = assumedGround();
    const at = (memory: DecisionMemory | null, minute: number, window: NumericComparison) =>
      decide(memory, judged(window, minute * MINUTE_MS), ground);
    const first = at(at(null, 1, slightlyHeavyUpperTail()).memory, 2, slightlyHeavyUpperTail());
    expect(first.memory.history.windows).toBe(2);
    const after = at(first.memory, 9, slightlyHeavyUpperTail());
    expect(after.memory.history.windows).toBe(1);
    expect(after.state).toBe("holding");
    const drifted = at(at(null, 1, muchHigher()).memory, 30, same());
    expect(drifted.state).toBe("adrift");
  });

  test.each(["fewValues", "nothing"] as const)(
    "decide calls %s thin, and says that it cannot tell",
    (name) => {
      const thin = WINDOWS[name]();
      const decisions = run([same(), thin]);
      expect(decisions.map((d) => d.state)).toEqual(["holding", "thin"]);
      expect(sentence(decisions[1]!, thin)).toMatch(
        /^too few values to tell: n = \d+ against 20,000 in the baseline$/,
      );
    },
  );

  test("decide does not let thin windows end adrift", () => {
    const decisions = run([muchHigher(), ...repeat(WINDOWS.nothing, 4)]);
    expect(decisions.map((d) => d.state)).toEqual(Array(5).fill("adrift"));
    expect(sentence(decisions[4]!, WINDOWS.nothing())).toBe(
      "still adrift, for this window cannot tell; too few values to tell: n = 0 against 20,000 in the baseline",
    );
  });

  test("decide judges windows that are each too thin by what they are together", () => {
    // Twenty values a window, half of them beyond the baseline's p99.
    const window = () => windowOf(evenSample(20, (v, rank) => (rank > 0.5 ? 6 : v)));
    const decisions = run(repeat(window, 12));
    expect(decisions[0]!.state).toBe("thin");
    expect(decisions.at(-1)!.state).toBe("adrift");
  });

  test("decide judges missing values also where no value is left to compare", () => {
    const window = WINDOWS.allMissing();
    const decision = run([same(), window])[1]!;
    expect(decision).toMatchObject({
      state: "adrift",
      memory: { place: { part: "missing", direction: "more", rank: null } },
    });
    expect(sentence(decision, window)).toContain("more missing values: 100.0 % of events carry no value");
  });

  test("decide sees a tenth of the events missing within three windows", () => {
    const decisions = run(repeat(WINDOWS.tenthMissing, 3));
    expect(decisions[2]).toMatchObject({ state: "adrift", memory: { place: { part: "missing" } } });
  });

  test("decide is pure: the same arguments give the same decision and leave the memory as it was", () => {
    const memory = Object.freeze(run([slightlyHigher()])[0]!.memory);
    const copy = JSON.stringify(memory);
    const [window, ground] = [judged(slightlyHigher(), 2 * MINUTE_MS), assumedGround()];
    expect(decide(memory, window, ground)).toEqual(decide(memory, window, ground));
    expect(JSON.stringify(memory)).toBe(copy);
  });

  test("decide keeps its memory below 8 kB, however long it runs", () => {
    const last = run(repeat(muchHigher, 500)).at(-1)!;
    expect(JSON.stringify(last.memory).length).toBeLessThan(8_000);
    expect(last.memory.history.windows).toBe(500);
  });
});

describe("decide on streams that vary by themselves", () => {
  const EACH = 200;

  test("decide learns from the blocks that values hang together: no page where independent events would have given many", () => {
    const next = autoregressive(0.9, new Random(4_101));
    const blocks = blocksOf(600, EACH, NORMAL_THRESHOLDS, next);
    const learnt = groundOf(blocks, NORMAL_THRESHOLDS);
    const assumed = independentGround(blocks, NORMAL_THRESHOLDS);
    expect(learnt.tolerance.designEffect(5, 1, EACH)).toBeGreaterThan(8);
    const pages = (ground: DecisionGround) => {
      let memory: DecisionMemory | null = null;
      let count = 0;
      const source = autoregressive(0.9, new Random(4_102));
      for (let i = 0; i < 3_000; i += 1) {
        const counts = countsOf(Array.from({ length: EACH }, source), NORMAL_THRESHOLDS);
        const decision = decide(memory, { counts, endMs: i * MINUTE_MS }, ground);
        if (decision.state === "adrift" && memory?.state !== "adrift") count += 1;
        memory = decision.memory;
      }
      return count;
    };
    expect(pages(learnt)).toBe(0);
    expect(pages(assumed)).toBeGreaterThan(0);
  });

  test("decide is not moved by what the baseline itself did: the same rule found it there", () => {
    // Blocks 300 to 339 of the baseline were far off by themselves.
    const random = new Random(4_103);
    const blocks = blocksOf(
      600,
      EACH,
      NORMAL_THRESHOLDS,
      (block) => random.normal() + (block >= 300 && block < 340 ? 1 : 0),
    );
    const ground = groundOf(blocks, NORMAL_THRESHOLDS, { ...RULE, zAtOnce: 99 });
    const replayed = ground.replay().sustained[5]!;
    expect(replayed).toBeGreaterThan(3);
    const shifted = (by: number) => {
      let memory: DecisionMemory | null = null;
      for (let i = 0; i < 12; i += 1) {
        const counts = countsOf(
          Array.from({ length: EACH }, () => random.normal() + by),
          NORMAL_THRESHOLDS,
        );
        memory = decide(memory, { counts, endMs: i * MINUTE_MS }, ground).memory;
      }
      return memory!.state;
    };
    expect(shifted(1)).not.toBe("adrift");
  });
});
