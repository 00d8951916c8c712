// How often the simultaneous band holds when nothing changed: node packages/stats/bench/measure-band.mjs [draws]
// (after a build). Talks on stderr; the last line of stdout is one JSON object. "Holds": the baseline's quantile lies within the band at
// every supported rank, for independent values. The band is made of ranks, so that any increasing change of production moves band and
// truth alike: these figures are also the coverage of a shift function.
import { cdfOf, quantileOf, quantilePairs } from "../dist/index.js";

const DRAWS = Number(process.argv[2] ?? 2000);
const SEED = 20260113;
const SIZES = [
  [200, 200],
  [1000, 200],
  [1000, 1000],
  [20_000, 200],
  [20_000, 1000],
  [20_000, 5000],
];
const CONFIDENCES = [0.95, 0.99, 0.999];
const uniform = generator(SEED);

const rows = SIZES.map(([n, m]) => {
  const draws = Math.max(300, Math.round((DRAWS * 1200) / (n + m + 1000)));
  const held = [0, 0, 0];
  for (let draw = 0; draw < draws; draw += 1) {
    const baseline = cdfOf(Float64Array.from({ length: n }, uniform));
    const production = cdfOf(Float64Array.from({ length: m }, uniform));
    for (const [i, confidence] of CONFIDENCES.entries()) {
      if (holds(baseline, production, confidence)) held[i] += 1;
    }
  }
  const row = { n, m, draws, coverage: held.map((k) => k / draws) };
  console.error(`${n} against ${m}: ${row.coverage.map((c) => c.toFixed(4)).join(" ")} (${draws} draws)`);
  return row;
});
console.log(JSON.stringify({ seed: SEED, node: process.version, confidences: CONFIDENCES, rows }));

function holds(baseline, production, confidence) {
  return quantilePairs(baseline, production, { confidence }).every(({ rank, low, high }) => {
    const x = quantileOf(baseline, rank);
    return (low === null || x >= low) && (high === null || x <= high);
  });
}

/** mulberry32. */
function generator(seed) {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return (((t ^ (t >>> 14)) >>> 0) + 0.5) / 4294967296;
  };
}
