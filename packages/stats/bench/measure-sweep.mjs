// How long 10,000 comparisons of two compressed CDFs take: node packages/stats/bench/measure-sweep.mjs (after a build).
// Talks on stderr; the last line of stdout is one JSON object. Compared in the same run: one sweep for both distances against two.
import { ksDistance, sweepCdfs, wasserstein1 } from "../dist/index.js";

const PAIRS = 10_000;
const KNOTS = 140;
const ROUNDS = 15;
const SEED = 20260112;

const uniform = generator(SEED);
const views = Array.from({ length: 400 }, () => slopingView(KNOTS));
const pairs = Array.from({ length: PAIRS }, (_, i) => [
  views[i % views.length],
  views[Math.floor(uniform() * views.length)],
]);

const timings = {
  sweep: () => pairs.reduce((sum, [a, b]) => sum + sweepCdfs(a, b).area, 0),
  ksAndW1Apart: () => pairs.reduce((sum, [a, b]) => sum + wasserstein1(a, b) + ksDistance(a, b).distance, 0),
};
const medianMs = Object.fromEntries(Object.entries(timings).map(([name, run]) => [name, medianOf(run)]));
console.error(
  `one sweep: ${medianMs.sweep.toFixed(1)} ms for ${PAIRS} pairs of ${KNOTS}-knot CDFs (goal: 100 ms)`,
);
console.log(
  JSON.stringify({
    pairs: PAIRS,
    knots: KNOTS,
    rounds: ROUNDS,
    seed: SEED,
    node: process.version,
    sweepMs: medianMs.sweep,
    apartMs: medianMs.ksAndW1Apart,
    sweepOverApart: medianMs.sweep / medianMs.ksAndW1Apart,
    goalMs: 100,
  }),
);

function medianOf(run) {
  run();
  const times = Array.from({ length: ROUNDS }, () => {
    const start = process.hrtime.bigint();
    run();
    return Number(process.hrtime.bigint() - start) / 1e6;
  });
  return times.sort((a, b) => a - b)[ROUNDS >> 1];
}

/** A compressed window: singletons at the ends, sloping between, a few atoms. */
function slopingView(knots) {
  const shift = uniform();
  const values = new Float64Array(knots);
  const below = new Float64Array(knots);
  const upTo = new Float64Array(knots);
  let events = 0;
  for (let i = 0; i < knots; i += 1) {
    const rank = (i + 0.5) / knots;
    values[i] = Math.log(rank / (1 - rank)) + shift + 0.01 * uniform();
    events += i === 0 ? 0 : 100 * uniform();
    below[i] = events;
    events += i < 5 || i >= knots - 5 || i % 20 === 0 ? 1 : 0;
    upTo[i] = events;
  }
  values.sort();
  return { n: events, values, below, upTo, exact: false, rankErrorAt: () => 0.003 };
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
