// Actual sizes of the categorical tests and what chance makes of the indices, on Zipf(1.1) categories without a change.
//   node packages/stats/bench/measure-categories.mjs [--draws 3000] [--seed 91102]      after `tsc -b packages/stats`; about five minutes
// Talks on stderr, prints one JSON object as the last line of stdout.
import { readFileSync } from "node:fs";
import { parseArgs } from "node:util";
import { categoricalVerdict, compareCategories, homogeneityTest } from "../dist/index.js";

const { values: options } = parseArgs({
  options: { draws: { type: "string", default: "3000" }, seed: { type: "string", default: "91102" } },
});
const draws = Number(options.draws);
const seed = Number(options.seed);
const LEVELS = [0.05, 0.01, 0.001];

/** A seeded generator (mulberry32). */
function generator(start) {
  let state = start >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return (((t ^ (t >>> 14)) >>> 0) + 0.5) / 4294967296;
  };
}

/** Draws from Zipf's law by Walker's alias table: constant time a draw. */
function zipf(kinds, uniform) {
  const shares = Array.from({ length: kinds }, (_, i) => (i + 1) ** -1.1);
  const sum = shares.reduce((a, b) => a + b, 0);
  const scaled = shares.map((share) => (share / sum) * kinds);
  const alias = new Uint32Array(kinds);
  const small = [];
  const large = [];
  for (const [i, share] of scaled.entries()) (share < 1 ? small : large).push(i);
  while (small.length > 0 && large.length > 0) {
    const s = small.pop();
    const l = large.at(-1);
    alias[s] = l;
    scaled[l] += scaled[s] - 1;
    if (scaled[l] < 1) small.push(large.pop());
  }
  for (const i of [...small, ...large]) scaled[i] = 1;
  return (events) => {
    const counts = new Uint32Array(kinds);
    for (let i = 0; i < events; i += 1) {
      const at = Math.floor(uniform() * kinds);
      counts[uniform() < scaled[at] ? at : alias[at]] += 1;
    }
    return counts;
  };
}

function sideOf(counts, names) {
  const map = new Map();
  let events = 0;
  counts.forEach((count, i) => {
    if (count === 0) return;
    map.set(names[i], count);
    events += count;
  });
  return { events, missing: 0, counts: map, other: 0 };
}

const round = (value) => Number(value.toPrecision(3));

function measure({ kinds, n, m }) {
  const uniform = generator(seed + kinds + n);
  const draw = zipf(kinds, uniform);
  const names = Array.from({ length: kinds }, (_, i) => `c${i}`);
  const below = {
    pooledG: [0, 0, 0],
    pooledChiSquare: [0, 0, 0],
    rawG: [0, 0, 0],
    rawChiSquare: [0, 0, 0],
    unseen: [0, 0, 0],
  };
  const mean = {
    bins: 0,
    psi: 0,
    psiExpected: 0,
    js: 0,
    jsExpected: 0,
    tv: 0,
    tvExpected: 0,
    unseen: 0,
    unseenExpected: 0,
    unseenSquare: 0,
  };
  const states = { holding: 0, straining: 0, adrift: 0, thin: 0 };
  for (let i = 0; i < draws; i += 1) {
    const [a, b] = [draw(n), draw(m)];
    const raw = homogeneityTest([[...a], [...b]]);
    const compared = compareCategories(sideOf(a, names), sideOf(b, names));
    LEVELS.forEach((level, l) => {
      if (compared.g.pValue <= level) below.pooledG[l] += 1;
      if (compared.chiSquare.pValue <= level) below.pooledChiSquare[l] += 1;
      if (raw.g.pValue <= level) below.rawG[l] += 1;
      if (raw.chiSquare.pValue <= level) below.rawChiSquare[l] += 1;
      if (compared.unseen.pValue <= level) below.unseen[l] += 1;
    });
    mean.bins += compared.bins;
    mean.psi += compared.psi;
    mean.psiExpected += compared.psiNoise.expected;
    mean.js += compared.jensenShannon;
    mean.jsExpected += compared.jensenShannonNoise.expected;
    mean.tv += compared.totalVariation.distance;
    mean.tvExpected += compared.totalVariation.noise;
    mean.unseen += compared.unseen.events;
    mean.unseenSquare += compared.unseen.events ** 2;
    mean.unseenExpected += compared.unseen.expected;
    states[categoricalVerdict(compared).state] += 1;
  }
  for (const key of Object.keys(mean)) mean[key] /= draws;
  const unseenVariance = mean.unseenSquare - mean.unseen ** 2;
  delete mean.unseenSquare;
  const share = (count) => round(count / draws);
  const row = {
    kinds,
    n,
    m,
    sizes: Object.fromEntries(Object.entries(below).map(([test, counts]) => [test, counts.map(share)])),
    means: Object.fromEntries(
      [...Object.entries(mean), ["unseenVariance", unseenVariance]].map(([k, v]) => [k, round(v)]),
    ),
    states: Object.fromEntries(Object.entries(states).map(([state, count]) => [state, share(count)])),
  };
  console.error(`K=${kinds} n=${n} m=${m}: ${JSON.stringify(row.sizes)} ${JSON.stringify(row.states)}`);
  return row;
}

/** Verdicts on named changes: 50 Zipf categories, baseline 100,000, so many events each. */
const CHANGES = {
  "6 points from the first category to the second": (counts, m) => moveEvents(counts, 0, 1, 0.06 * m),
  "2 % of events in a new category": (counts, m) => takeForNew(counts, 0.02 * m),
  "a category of 1.6 % is gone": (counts) => moveEvents(counts, 10, 0, counts[10]),
  "every second category down by 30 %": (counts) => {
    for (let k = 1; k < counts.length; k += 2) moveEvents(counts, k, k - 1, 0.3 * counts[k]);
    return counts;
  },
  "3 points from the first category to the second": (counts, m) => moveEvents(counts, 0, 1, 0.03 * m),
};

function moveEvents(counts, from, to, events) {
  const moved = Math.min(counts[from], Math.round(events));
  counts[from] -= moved;
  counts[to] += moved;
  return counts;
}

function takeForNew(counts, events) {
  const longer = Uint32Array.from([...counts, 0]);
  return moveEvents(longer, 0, longer.length - 1, events);
}

function detect(m) {
  const uniform = generator(seed + m);
  const draw = zipf(50, uniform);
  const names = Array.from({ length: 51 }, (_, i) => `c${i}`);
  const repeats = Math.ceil(draws / 10);
  const states = {};
  for (const [name, change] of Object.entries(CHANGES)) {
    const found = { holding: 0, straining: 0, adrift: 0, thin: 0 };
    for (let i = 0; i < repeats; i += 1) {
      const compared = compareCategories(sideOf(draw(100_000), names), sideOf(change(draw(m), m), names));
      found[categoricalVerdict(compared).state] += 1 / repeats;
    }
    states[name] = Object.fromEntries(Object.entries(found).map(([state, share]) => [state, round(share)]));
    console.error(`m=${m} ${name}: ${JSON.stringify(states[name])}`);
  }
  return { kinds: 50, n: 100_000, m, repeats, states };
}

const started = performance.now();
const changes = [1000, 5000].map(detect);
const rows = [
  { kinds: 50, n: 100_000, m: 1000 },
  { kinds: 1000, n: 100_000, m: 1000 },
  { kinds: 50, n: 1000, m: 1000 },
  { kinds: 1000, n: 5000, m: 1000 },
  { kinds: 20_000, n: 20_000, m: 1000 },
].map(measure);
const { version } = JSON.parse(readFileSync(new URL("../package.json", import.meta.url), "utf8"));
console.log(
  JSON.stringify({
    measure: "categories",
    law: "Zipf 1.1, nothing changed",
    levels: LEVELS,
    draws,
    seed,
    rows,
    changes,
    seconds: Math.round((performance.now() - started) / 1000),
    versions: { node: process.version, stats: version },
  }),
);
