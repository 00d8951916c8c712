// How often the reading of a simulated change is right: pnpm run measure:readings
//   [--cases 240] [--seed 20261231] [--sizes 1000,5000]
// Through real sketches, with the compressions that baselines and windows have. Talks on stderr; the last line of stdout is one JSON object.
import { parseArgs } from "node:util";
import { NumericSketch } from "@moorline/sketch";
import { type NumericSide, readPattern } from "../dist/index.js";
import { FAMILIES, patternCase, TRUTHS, type Truth } from "../test/kit/pattern-cases.js";

const { values: options } = parseArgs({
  options: {
    cases: { type: "string", default: "240" },
    seed: { type: "string", default: "20261231" },
    sizes: { type: "string", default: "1000,5000" },
  },
});
const cases = Number(options.cases);
const seed = Number(options.seed);
const BASELINE = 50_000;
const BASELINE_COMPRESSION = 500;

/** As a side comes back from the store: encoded and decoded. */
function sideOf(values: Float64Array, compression?: number): NumericSide {
  const sketch = new NumericSketch(compression === undefined ? {} : { compression });
  sketch.addColumn(values);
  const cdf = NumericSketch.decode(sketch.encode()).toCdf();
  return { cdf, events: values.length, missing: 0, nonFinite: 0 };
}

interface Read {
  readonly truth: Truth;
  readonly family: string;
  readonly kind: string;
  readonly runnerUp: string | null;
}

function readCases(truth: Truth, m: number): readonly Read[] {
  return Array.from({ length: cases }, (_, i) => {
    const family = FAMILIES[i % FAMILIES.length]!;
    const seedOfCase = seed + 1_000_003 * TRUTHS.indexOf(truth) + 7_919 * i + m;
    const { baseline, production } = patternCase(truth, family, m, seedOfCase, BASELINE);
    const { kind, runnerUp } = readPattern(sideOf(baseline, BASELINE_COMPRESSION), sideOf(production));
    return { truth, family, kind, runnerUp };
  });
}

const UNNAMED: ReadonlySet<string> = new Set(["none", "thin", "cannot tell"]);
const share = (reads: readonly Read[], holds: (read: Read) => boolean) =>
  reads.length === 0 ? 0 : reads.filter(holds).length / reads.length;
const isRight = ({ kind, truth }: Read) => kind === truth;

function measure(m: number) {
  const confusion: Record<string, Record<string, number>> = {};
  const rightByKind: Record<string, number> = {};
  const all = TRUTHS.flatMap((truth) => {
    const reads = readCases(truth, m);
    const row: Record<string, number> = {};
    for (const { kind } of reads) row[kind] = (row[kind] ?? 0) + 1;
    confusion[truth] = row;
    rightByKind[truth] = share(reads, isRight);
    console.error(`m = ${m}  ${truth}: ${(100 * rightByKind[truth]).toFixed(1)} %  ${JSON.stringify(row)}`);
    return reads;
  });
  const families = Object.fromEntries(
    FAMILIES.map((family) => [
      family,
      share(
        all.filter((read) => read.family === family),
        isRight,
      ),
    ]),
  );
  const right = share(all, isRight);
  const wronglyNamed = share(all, (read) => !isRight(read) && !UNNAMED.has(read.kind));
  const rightOrRunnerUp = share(all, (read) => isRight(read) || read.runnerUp === read.truth);
  console.error(`m = ${m}: ${(100 * right).toFixed(2)} %  ${JSON.stringify(families)}`);
  return { m, right, wronglyNamed, rightOrRunnerUp, rightByKind, families, confusion };
}

const started = performance.now();
const sizes = options.sizes.split(",").map((m) => measure(Number(m)));
console.log(
  JSON.stringify({
    measure: "readings",
    casesAKind: cases,
    kinds: TRUTHS.length,
    baselineRows: BASELINE,
    baselineCompression: BASELINE_COMPRESSION,
    seed,
    goal: { 1000: 0.95, 5000: 0.98 },
    sizes,
    seconds: Math.round((performance.now() - started) / 1_000),
    node: process.version,
  }),
);
