// How often the slice that changed is named first: node --import tsx packages/stats/bench/measure-slices.ts (after a build) [--cases 200] [--seed 20261206]
// Twelve slices through real sketches. Talks on stderr; the last line of stdout is one JSON object.
import { parseArgs } from "node:util";
import { NumericSketch } from "@moorline/sketch";
import { sliceContributions } from "../dist/index.js";
import { SLICE_CHANGES, sliceCase } from "../test/kit/slice-cases.js";

const { values: options } = parseArgs({
  options: { cases: { type: "string", default: "200" }, seed: { type: "string", default: "20261206" } },
});
const cases = Number(options.cases);
const seed = Number(options.seed);
const BASELINE = 20_000;

function viewOf(values: readonly number[], compression: number) {
  const sketch = new NumericSketch({ compression });
  sketch.addColumn(Float64Array.from(values));
  return sketch.toCdf();
}

const rows = [2_000, 20_000].flatMap((m) =>
  SLICE_CHANGES.map((change, c) => {
    let first = 0;
    let named = 0;
    let worstSum = 0;
    for (let i = 0; i < cases; i += 1) {
      const { slices, guilty } = sliceCase(change, BASELINE, m, seed + 7_919 * i + 1_000_003 * c + m);
      const answer = sliceContributions(
        slices.map(({ slice, baseline, production }) => ({
          slice,
          baseline: viewOf(baseline, 500),
          production: viewOf(production, 200),
        })),
      );
      const top = answer.slices[0]!;
      if (top.slice === guilty) first += 1;
      if (top.slice === guilty && answer.sentence.includes(`${guilty} `)) named += 1;
      const sum = answer.slices.reduce(
        (total, { wasserstein }) => total + wasserstein.within + wasserstein.mix,
        0,
      );
      worstSum = Math.max(worstSum, Math.abs(sum - answer.distance) / answer.distance);
    }
    const row = { m, change, first: first / cases, named: named / cases, worstSumError: worstSum };
    console.error(JSON.stringify(row));
    return row;
  }),
);
console.log(
  JSON.stringify({
    measure: "slices",
    slices: 12,
    baseline: BASELINE,
    cases,
    seed,
    rows,
    node: process.version,
  }),
);
