// How often the reading of a simulated change is right: node --import tsx packages/stats/bench/measure-readings.ts (after a build)
//   [--cases 120] [--seed 20261204] [--sizes 1000,5000]
// Through real sketches, with the compressions that baselines and windows have. Talks on stderr; the last line of stdout is one JSON object.
import { parseArgs } from "node:util";
import { NumericSketch } from "@moorline/sketch";
import { findPatterns } from "../dist/reading/find-pattern.js";
import { FAMILIES, patternCase, TRUTHS } from "../test/kit/pattern-cases.js";

const { values: options } = parseArgs({
  options: {
    cases: { type: "string", default: "120" },
    seed: { type: "string", default: "20261204" },
    sizes: { type: "string", default: "1000,5000" },
  },
});
const cases = Number(options.cases);
const seed = Number(options.seed);

function viewOf(values: Float64Array, compression?: number) {
  const sketch = new NumericSketch(compression === undefined ? {} : { compression });
  sketch.addColumn(values);
  return NumericSketch.decode(sketch.encode()).toCdf();
}

const sizes = options.sizes
  .split(",")
  .map(Number)
  .map((m) => {
    const table: Record<string, Record<string, number>> = {};
    const byFamily: Record<string, { right: number; cases: number }> = {};
    let right = 0;
    for (const [t, truth] of TRUTHS.entries()) {
      const row: Record<string, number> = {};
      for (let i = 0; i < cases; i += 1) {
        const family = FAMILIES[i % FAMILIES.length]!;
        const { baseline, production } = patternCase(truth, family, m, seed + 1_000_003 * t + 7_919 * i + m);
        const { first } = findPatterns(viewOf(baseline, 500), viewOf(production), 1);
        row[first.kind] = (row[first.kind] ?? 0) + 1;
        const of = byFamily[family] ?? { right: 0, cases: 0 };
        byFamily[family] = of;
        of.cases += 1;
        if (first.kind === truth) {
          right += 1;
          of.right += 1;
        }
      }
      table[truth] = row;
      console.error(
        `m = ${m}  ${truth}: ${(((row[truth] ?? 0) / cases) * 100).toFixed(1)} %  ${JSON.stringify(row)}`,
      );
    }
    const share = right / (cases * TRUTHS.length);
    const families = Object.fromEntries(
      Object.entries(byFamily).map(([family, of]) => [family, of.right / of.cases]),
    );
    console.error(`m = ${m}: ${(share * 100).toFixed(2)} %  ${JSON.stringify(families)}`);
    return { m, right: share, families, table };
  });
console.log(
  JSON.stringify({
    measure: "readings",
    casesAKind: cases,
    baseline: 50_000,
    seed,
    sizes,
    node: process.version,
  }),
);
