// What comparing and deciding costs: node --import tsx test/load/measure-compare.ts (after a build) [--features 10000] [--seed 20261205]
// Every feature has a baseline sketch and a window at three horizons; each window is compared, decided and put into words as the evaluator does it.
// Talks on stderr; the last line of stdout is one JSON object.
import { parseArgs } from "node:util";
import { sideOfSketch } from "@moorline/baseline";
import { NumericSketch } from "@moorline/sketch";
import {
  compareNumeric,
  type DecisionMemory,
  decide,
  decisionSentence,
  learnSway,
  NO_REPLAY,
  type NumericComparison,
  type NumericSide,
  quantilePairs,
  sideCounts,
  sweepCdfs,
  Tolerance,
  windowCounts,
} from "@moorline/stats";
import { CountsAtThresholds } from "./decision/counts-at-thresholds.js";
import { FastRandom } from "./decision/fast-random.js";
import { MINUTE_MS, RULE_OF_A_TEAM } from "./decision/setting.js";

const { values: options } = parseArgs({
  options: { features: { type: "string", default: "10000" }, seed: { type: "string", default: "20261205" } },
});
const features = Number(options.features);
const random = new FastRandom(Number(options.seed));

const BASELINE_VALUES = 20_000;
const HORIZONS = [
  { label: "5m", ms: 5 * MINUTE_MS, values: 1_000 },
  { label: "1h", ms: 60 * MINUTE_MS, values: 12_000 },
  { label: "24h", ms: 1_440 * MINUTE_MS, values: 50_000 },
] as const;
const ROUNDS = 5;

function columnOf(values: number): Float64Array {
  const column = new Float64Array(values);
  random.fillNormal(column);
  return column;
}

function sketchOf(
  column: Float64Array,
  sketchOptions: ConstructorParameters<typeof NumericSketch>[0],
): NumericSketch {
  const sketch = new NumericSketch(sketchOptions);
  sketch.addColumn(column);
  return sketch;
}

/** Blocks of a baseline, for the sway; a few are enough, their cost is not measured. */
function swayOf(thresholds: readonly number[]) {
  const counter = new CountsAtThresholds(thresholds);
  const column = new Float64Array(100);
  const windows = Array.from({ length: 400 }, () => {
    random.fillNormal(column);
    return counter.count(column);
  });
  return learnSway({
    lengthMs: 5 * MINUTE_MS,
    startMs: 0,
    events: windows.map(({ events }) => events),
    missing: windows.map(() => 0),
    finite: windows.map(({ finite }) => finite),
    atOrBelow: thresholds.map((_, share) => windows.map(({ atOrBelow }) => atOrBelow[share]!)),
  });
}

console.error(`making ${features} baselines and ${3 * features} windows …`);
const series: {
  baseline: NumericSide;
  production: NumericSide;
  horizon: (typeof HORIZONS)[number];
  ground: Ground;
}[] = [];
type Ground = Parameters<typeof decide>[2];
let sway: ReturnType<typeof learnSway> = null;
for (let feature = 0; feature < features; feature += 1) {
  const column = columnOf(BASELINE_VALUES);
  const { thresholds } = sideCounts(sideOfSketch(sketchOf(column, { compression: 500 })));
  if (feature % 200 === 0) sway = swayOf(thresholds);
  const counted = { id: "b", values: [...thresholds] };
  const baseline = sideOfSketch(sketchOf(column, { compression: 500, thresholds: counted }));
  const counts = sideCounts(baseline);
  for (const horizon of HORIZONS) {
    const production = sideOfSketch(sketchOf(columnOf(horizon.values), { thresholds: counted }));
    const tolerance = new Tolerance({ baseline: counts, sway, windowMs: horizon.ms });
    const ground = { tolerance, rule: RULE_OF_A_TEAM, replay: () => NO_REPLAY, thresholds };
    series.push({ baseline, production, horizon, ground });
  }
}

const comparisons: NumericComparison[] = new Array(series.length);
// A history of twelve windows each, so that every scale has something to look at.
const memories = series.map(({ baseline, production, horizon, ground }): DecisionMemory => {
  const counts = windowCounts(compareNumeric(baseline, production, { pairs: false }));
  let memory: DecisionMemory | null = null;
  for (let window = 1; window <= 12; window += 1)
    memory = decide(memory, { counts, endMs: window * horizon.ms }, ground).memory;
  return memory!;
});

const STEPS: Readonly<Record<string, () => void>> = {
  "KS and W1 alone (part of the comparison)": () => {
    for (const { baseline, production } of series) sweepCdfs(baseline.cdf, production.cdf);
  },
  comparison: () => {
    for (const [i, { baseline, production }] of series.entries())
      comparisons[i] = compareNumeric(baseline, production, { pairs: false });
  },
  decision: () => {
    for (const [i, { horizon, ground }] of series.entries()) {
      const window = { counts: windowCounts(comparisons[i]!), endMs: 13 * horizon.ms };
      decide(memories[i]!, window, ground);
    }
  },
  "decision and its sentence": () => {
    for (const [i, { horizon, ground }] of series.entries()) {
      const counts = windowCounts(comparisons[i]!);
      decisionSentence(decide(memories[i]!, { counts, endMs: 13 * horizon.ms }, ground), counts, ground);
    }
  },
  "quantile pairs with their band (made when somebody asks)": () => {
    for (const { baseline, production } of series) quantilePairs(baseline.cdf, production.cdf);
  },
};

const seconds: Record<string, number> = {};
for (const [step, run] of Object.entries(STEPS)) {
  const times = Array.from({ length: ROUNDS }, () => {
    const started = performance.now();
    run();
    return (performance.now() - started) / 1_000;
  });
  seconds[step] = times.sort((a, b) => a - b)[ROUNDS >> 1]!;
  console.error(`${step}: ${seconds[step]!.toFixed(3)} s, median of ${ROUNDS}`);
}
const evaluated = seconds["comparison"]! + seconds["decision and its sentence"]!;
const goals = { evaluatedSeconds: 2, sweepSeconds: 0.3 };
const sweep = seconds["KS and W1 alone (part of the comparison)"]!;
console.error(
  `compared and decided: ${evaluated.toFixed(2)} s (goal ${goals.evaluatedSeconds}), of which the sweep ${sweep.toFixed(2)} s (goal ${goals.sweepSeconds})`,
);
console.log(
  JSON.stringify({
    measure: "compare",
    features,
    horizons: HORIZONS.map(({ label, values }) => ({ label, values })),
    windows: series.length,
    baselineValues: BASELINE_VALUES,
    seconds,
    evaluatedSeconds: evaluated,
    sweepShare: sweep / evaluated,
    microsecondsAWindow: (evaluated / series.length) * 1e6,
    goals,
    seed: Number(options.seed),
    node: process.version,
  }),
);
