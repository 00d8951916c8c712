// How far the estimated onset of a change is from the truth: node --import tsx packages/stats/bench/measure-onset.ts (after a build) [--cases 150] [--seed 20261207]
// Talks on stderr; the last line of stdout is one JSON object.
import { parseArgs } from "node:util";
import { findBreak, findOnset, learnSway } from "../dist/index.js";
import { autoregressive, blocksOf, NORMAL_THRESHOLDS } from "../test/kit/grounds.js";
import { NORMAL_SHARES, ONSET_CHANGES, ONSET_WINDOWS, onsetCase } from "../test/kit/onset-cases.js";
import { Random } from "../test/kit/random.js";

const { values: options } = parseArgs({
  options: { cases: { type: "string", default: "150" }, seed: { type: "string", default: "20261207" } },
});
const cases = Number(options.cases);
const seed = Number(options.seed);

const quantile = (values: readonly number[], rank: number) =>
  [...values].sort((a, b) => a - b)[Math.min(values.length - 1, Math.floor(rank * values.length))] ?? null;

const rows = [0, 0.8].flatMap((phi) => {
  const random = new Random(seed);
  const blocks = blocksOf(
    400,
    1_000,
    NORMAL_THRESHOLDS,
    phi === 0 ? () => random.normal() : autoregressive(phi, random),
  );
  const sway = learnSway(blocks)!;
  const effect = (rank: number) =>
    sway.effects[NORMAL_SHARES.findIndex((share) => Math.abs(share - rank) < 0.001)]!.effects[0]!;
  return Object.keys(ONSET_CHANGES).map((change, c) => {
    const errors: number[] = [];
    const breaks: number[] = [];
    const widths: number[] = [];
    let covered = 0;
    for (let i = 0; i < cases; i += 1) {
      const { windows, truth } = onsetCase(
        change,
        phi,
        seed + 7_919 * i + 1_000_003 * c + (phi > 0 ? 17 : 0),
      );
      const found = findOnset({ windows, expected: NORMAL_SHARES, designEffect: effect });
      if (!found.found) continue;
      errors.push(Math.abs(found.atMs - truth));
      widths.push(found.interval.toMs - found.interval.fromMs + 1);
      breaks.push(Math.abs(findBreak(windows)!.atMs - truth));
      if (found.interval.fromMs <= truth && truth <= found.interval.toMs) covered += 1;
    }
    const row = {
      phi,
      change,
      found: errors.length / cases,
      medianError: quantile(errors, 0.5),
      p90Error: quantile(errors, 0.9),
      coverage: covered / errors.length,
      medianWidth: quantile(widths, 0.5),
      withoutBaseline: { medianError: quantile(breaks, 0.5), p90Error: quantile(breaks, 0.9) },
    };
    console.error(JSON.stringify(row));
    return row;
  });
});
const coverage = rows.reduce((sum, row) => sum + row.coverage, 0) / rows.length;
console.log(
  JSON.stringify({
    measure: "onset",
    windows: ONSET_WINDOWS,
    valuesAWindow: 1_000,
    statedRate: 0.95,
    coverage,
    cases,
    seed,
    rows,
    node: process.version,
  }),
);
