// How often the simultaneous band holds when nothing changed, and when the shape did: node packages/stats/bench/measure-band.mjs [draws]
// (after a build). Talks on stderr; the last line of stdout is one JSON object. "Holds": the true quantile pair lies within the band at
// every rank that is supported, for independent normal values; "changed" is production = 1.3·N(0, 1) + .2.
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
  const held = { same: [0, 0, 0], changed: [0, 0, 0] };
  for (let draw = 0; draw < draws; draw += 1) {
    const baseline = cdfOf(Float64Array.from({ length: n }, normal));
    const raw = Float64Array.from({ length: m }, normal);
    for (const [i, confidence] of CONFIDENCES.entries()) {
      if (holds(baseline, cdfOf(raw), confidence, (x) => x)) held.same[i] += 1;
      const changed = cdfOf(raw.map(change));
      if (holds(baseline, changed, confidence, change)) held.changed[i] += 1;
    }
  }
  const row = {
    n,
    m,
    draws,
    same: held.same.map((k) => k / draws),
    changed: held.changed.map((k) => k / draws),
  };
  console.error(`${n} against ${m}: same ${row.same.join(" ")}, changed ${row.changed.join(" ")}`);
  return row;
});
console.log(JSON.stringify({ seed: SEED, node: process.version, confidences: CONFIDENCES, rows }));

function change(x) {
  return 1.3 * x + 0.2;
}

/** The band is one for production's value at the baseline's quantile: the change applied to it must lie inside. */
function holds(baseline, production, confidence, mapped) {
  return quantilePairs(baseline, production, { confidence }).every(({ rank, baseline: own, low, high }) => {
    if (own === null) return true;
    const x = mapped(quantileOf(baseline, rank));
    return (low === null || x >= low) && (high === null || x <= high);
  });
}

function normal() {
  return Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
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
