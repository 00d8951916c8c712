import { NumericSketch } from "@moorline/sketch";
import { describe, expect, test } from "vitest";
import { andersonDarling } from "../src/anderson-darling/anderson-darling.js";
import type { CdfView } from "../src/cdf-view.js";
import { compareNumeric } from "../src/compare-numeric.js";
import { compareVerdict } from "../src/decision/compare-verdict.js";
import { decide } from "../src/decision/decide.js";
import type { DecisionMemory } from "../src/decision/decision-memory.js";
import { decisionSentence } from "../src/decision/decision-sentence.js";
import { NO_REPLAY } from "../src/decision/replay.js";
import { sideCounts } from "../src/decision/side-counts.js";
import { whyOf } from "../src/decision/why.js";
import { windowCounts } from "../src/decision/window-counts.js";
import { type NumericSide, numericSideOf } from "../src/numeric-side.js";
import { readPattern } from "../src/reading/read-pattern.js";
import { blindRanks } from "../src/sensitivity/blind-ranks.js";
import { sensitivityOf } from "../src/sensitivity/sensitivity.js";
import { Tolerance } from "../src/sway/tolerance.js";
import { MINUTE_MS, RULE } from "./kit/grounds.js";
import { Random } from "./kit/random.js";

// Every answer of the package on what is at the edge of what can be answered: finite numbers, words without holes, JSON as it is.

const random = new Random(1_301);
const usual = numericSideOf(random.sample(2_000));
const repeated = (value: number | null, times: number) =>
  numericSideOf(Array.from({ length: times }, () => value));

/** A billion values in a sketch: counts as they are after a year, made by merging a sketch with itself. */
function billion(values: readonly number[]): NumericSide {
  let sketch = new NumericSketch();
  sketch.addColumn(Float64Array.from(values));
  while (sketch.counts.finite < 1e9) sketch = NumericSketch.merge([sketch, sketch, sketch, sketch]);
  const { events, finite, missing } = sketch.counts;
  return { cdf: sketch.toCdf(), events, missing, nonFinite: events - finite - missing };
}

const heavy = billion(random.sample(1_000));
const heavier = billion(random.sample(1_000, (r) => 3 + r.normal()));

const EDGES: readonly {
  readonly name: string;
  readonly baseline: NumericSide;
  readonly production: NumericSide;
  readonly states: readonly string[];
}[] = [
  { name: "n = 0 in production", baseline: usual, production: numericSideOf([]), states: ["thin"] },
  { name: "n = 0 in the baseline", baseline: numericSideOf([]), production: usual, states: ["thin"] },
  {
    name: "n = 0 on both sides",
    baseline: numericSideOf([]),
    production: numericSideOf([]),
    states: ["thin"],
  },
  { name: "n = 1", baseline: usual, production: numericSideOf([0.2]), states: ["thin"] },
  { name: "n = 2", baseline: usual, production: numericSideOf([0.2, -0.4]), states: ["thin"] },
  {
    name: "n = 1 on both sides",
    baseline: numericSideOf([1]),
    production: numericSideOf([2]),
    states: ["thin"],
  },
  {
    name: "one event a window, missing",
    baseline: usual,
    production: numericSideOf([null]),
    states: ["thin"],
  },
  {
    name: "all equal on both sides",
    baseline: repeated(4, 900),
    production: repeated(4, 300),
    states: ["holding"],
  },
  { name: "all missing", baseline: usual, production: repeated(null, 400), states: ["adrift"] },
  {
    name: "all missing on both sides",
    baseline: repeated(null, 900),
    production: repeated(null, 300),
    states: ["thin"],
  },
  {
    name: "a constant baseline, production not",
    baseline: repeated(4, 900),
    production: usual,
    states: ["adrift"],
  },
  {
    name: "constant production, the baseline not",
    baseline: usual,
    production: repeated(0, 900),
    states: ["adrift"],
  },
  { name: "another constant", baseline: repeated(4, 900), production: repeated(5, 300), states: ["adrift"] },
  {
    name: "no interquartile range",
    baseline: numericSideOf(random.sample(2_000, (r) => (r.uniform() < 0.8 ? 0 : r.normal()))),
    production: numericSideOf(random.sample(900, (r) => (r.uniform() < 0.8 ? 0 : r.normal()))),
    states: ["holding"],
  },
  {
    name: "infinite values",
    baseline: usual,
    production: numericSideOf([
      ...random.sample(900),
      ...Array(100).fill(Number.POSITIVE_INFINITY),
      Number.NEGATIVE_INFINITY,
      Number.NaN,
    ]),
    states: ["holding"],
  },
  {
    name: "nothing but infinite values",
    baseline: usual,
    production: numericSideOf(Array(400).fill(Number.POSITIVE_INFINITY)),
    states: ["thin"],
  },
  {
    name: "the greatest doubles",
    baseline: numericSideOf([-Number.MAX_VALUE, 0, Number.MAX_VALUE, ...random.sample(500)]),
    production: numericSideOf(random.sample(500, (r) => r.normal() * 1e308)),
    states: ["adrift"],
  },
  {
    name: "the smallest doubles",
    baseline: numericSideOf(random.sample(500, (r) => r.normal() * 5e-320)),
    production: numericSideOf(random.sample(500, (r) => r.normal() * 5e-320)),
    states: ["holding"],
  },
  { name: "a billion values on both sides", baseline: heavy, production: heavy, states: ["holding"] },
  { name: "a billion values, moved", baseline: heavy, production: heavier, states: ["adrift"] },
  {
    name: "a billion values against ten",
    baseline: heavy,
    production: numericSideOf(random.sample(10)),
    states: ["thin"],
  },
];

describe("the edges", () => {
  test.each(EDGES)(
    "$name: every answer is finite and says what it can",
    ({ baseline, production, states }) => {
      const comparison = compareNumeric(baseline, production);
      const verdict = compareVerdict(comparison);
      expect(states).toContain(verdict.state);
      const counts = sideCounts(baseline);
      const tolerance = new Tolerance({ baseline: counts, sway: null, windowMs: MINUTE_MS });
      const ground = { tolerance, rule: RULE, replay: () => NO_REPLAY, thresholds: counts.thresholds };
      const window = windowCounts(comparison);
      let memory: DecisionMemory | null = null;
      const answers: unknown[] = [comparison, verdict, readPattern(baseline, production)];
      for (let i = 1; i <= 14; i += 1) {
        const decision = decide(memory, { counts: window, endMs: i * MINUTE_MS }, ground);
        answers.push(decision, decisionSentence(decision, window, ground), whyOf(decision, ground));
        memory = decision.memory;
      }
      if (baseline.events > 0) {
        answers.push(sensitivityOf({ side: baseline, ground, eventsPerWindow: 1 }));
        answers.push(
          sensitivityOf({ side: baseline, ground, eventsPerWindow: 1_000 }),
          blindRanks(ground, 1),
        );
      }
      if (baseline.cdf.n > 0 && production.cdf.n > 0)
        answers.push(andersonDarling(baseline.cdf as CdfView, production.cdf as CdfView));
      for (const answer of answers) {
        expect(JSON.parse(JSON.stringify(answer))).toEqual(answer);
        expect(JSON.stringify(answer)).not.toMatch(/NaN|Infinity|undefined/);
      }
    },
  );

  test.each(EDGES)(
    "$name: what is thin in one look is no page in time, and what is adrift is",
    ({ baseline, production, states }) => {
      const counts = sideCounts(baseline);
      const tolerance = new Tolerance({ baseline: counts, sway: null, windowMs: MINUTE_MS });
      const ground = { tolerance, rule: RULE, replay: () => NO_REPLAY, thresholds: counts.thresholds };
      const window = windowCounts(compareNumeric(baseline, production));
      let memory: DecisionMemory | null = null;
      let state = "holding";
      for (let i = 1; i <= 3; i += 1) {
        const decision = decide(memory, { counts: window, endMs: i * MINUTE_MS }, ground);
        memory = decision.memory;
        state = decision.state;
      }
      expect(states).toContain(state);
    },
  );

  test("a default below an atom at the lowest threshold is seen, though every share at or below a threshold stays as it is", () => {
    const zeroHeavy = (fill: number) =>
      numericSideOf(random.sample(3_000, (r) => (r.uniform() < 0.7 ? fill : 1 + r.uniform())));
    const baseline = zeroHeavy(0);
    const filled = compareNumeric(baseline, zeroHeavy(-1));
    for (const share of filled.shares) expect(Math.abs(share.z)).toBeLessThan(4.1);
    const verdict = compareVerdict(filled);
    expect(verdict).toMatchObject({
      state: "adrift",
      place: { part: "lower tail", direction: "heavier", rank: 0.001 },
    });
    expect(verdict.sentence).toMatch(/lie below the baseline's p0\.1 \(0\)/);
    const counts = sideCounts(baseline);
    const tolerance = new Tolerance({ baseline: counts, sway: null, windowMs: MINUTE_MS });
    const ground = { tolerance, rule: RULE, replay: () => NO_REPLAY, thresholds: counts.thresholds };
    const window = windowCounts(filled);
    const decision = decide(null, { counts: window, endMs: MINUTE_MS }, ground);
    expect(decision.state).toBe("adrift");
    expect(decisionSentence(decision, window, ground)).toContain("lie below the baseline's p0.1 (0)");
    expect(whyOf(decision, ground).evidence!.share).toBe("below p0.001");
    expect(compareVerdict(compareNumeric(baseline, zeroHeavy(0))).state).toBe("holding");
  });
});
