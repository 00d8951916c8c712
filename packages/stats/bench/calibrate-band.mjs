// Which one-sided level of each rank makes the exact band hold at 95, 99 and 99.9 % over the grid: node packages/stats/bench/calibrate-band.mjs [draws]
// Talks on stderr; the last line of stdout is one JSON object. Levels are of the beta-binomial law of #{Y ≤ X(j)}, j = ⌈np⌉, equal at all ranks
// that the baseline reaches; the band of the package uses that of 29 normal ranks for every size.
import { GRID_RANKS } from "../dist/index.js";
import { Draws } from "./coverage-cases.mjs";

const DRAWS = Number(process.argv[2] ?? 20_000);
const SEED = 5_550_811;
const CONFIDENCES = [0.95, 0.99, 0.999];
const SIZES = [
  { n: 5000, m: 50 },
  { n: 20_000, m: 200 },
  { n: 20_000, m: 1000 },
  { n: 1000, m: 1000 },
  { n: 2000, m: 2000 },
];
const random = new Draws(SEED);

const rows = SIZES.map(({ n, m }) => {
  const places = [...new Set(GRID_RANKS.map((rank) => Math.ceil(n * rank - 1e-9)))];
  const laws = places.map((j) => cumulative(n, m, j));
  const least = Float64Array.from({ length: DRAWS }, () => leastTail(n, m, places, laws)).sort();
  const levels = CONFIDENCES.map((c) => Number(least[Math.floor((1 - c) * DRAWS)].toPrecision(3)));
  console.error(`${n} against ${m}: levels ${levels.join(" ")}`);
  return { n, m, levels };
});
console.log(
  JSON.stringify({ seed: SEED, node: process.version, draws: DRAWS, confidences: CONFIDENCES, rows }),
);

/** P(#{Y ≤ X(j)} ≤ k) for k = 0 … m, in logs so that no first term is too small to start from. */
function cumulative(n, m, j) {
  const sums = new Float64Array(m + 1);
  let log = 0;
  for (let i = 0; i < m; i += 1) log += Math.log((n - j + 1 + i) / (n + 1 + i));
  let sum = 0;
  for (let k = 0; k <= m; k += 1) {
    sum += Math.exp(log);
    sums[k] = Math.min(1, sum);
    log += Math.log(((k + j) / (k + 1)) * ((m - k) / (m - k + n - j)));
  }
  return sums;
}

/** The smaller tail of the count, least over the ranks, of one draw of both samples. */
function leastTail(n, m, places, laws) {
  const counts = countsAt(n, m, places);
  let least = 1;
  for (const [i, law] of laws.entries()) {
    const below = law[counts[i]];
    const above = counts[i] === 0 ? 1 : 1 - law[counts[i] - 1];
    least = Math.min(least, below, above);
  }
  return least;
}

/** How many of m values lie at or below each named order statistic of n: uniform order statistics are sums of exponential spacings. */
function countsAt(n, m, places) {
  const edges = new Float64Array(places.length);
  let sum = 0;
  let next = 0;
  for (let i = 1; i <= n + 1; i += 1) {
    sum -= Math.log(random.uniform());
    if (places[next] === i) {
      edges[next] = sum;
      next += 1;
    }
  }
  const counts = new Int32Array(places.length);
  for (let i = 0; i < m; i += 1) {
    const value = random.uniform() * sum;
    let [low, high] = [0, places.length];
    while (low < high) {
      const middle = (low + high) >> 1;
      if (edges[middle] < value) low = middle + 1;
      else high = middle;
    }
    if (low < places.length) counts[low] += 1;
  }
  for (let i = 1; i < counts.length; i += 1) counts[i] += counts[i - 1];
  return counts;
}
