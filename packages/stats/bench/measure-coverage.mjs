// How often the simultaneous band holds through real sketches: node packages/stats/bench/measure-coverage.mjs [scale of the number of draws]
// (after a build). Talks on stderr; the last line of stdout is one JSON object. Baselines have compression 500, windows the default, and both
// went through their encoded form. "Holds": at every rank that both sides reach, the true value that production has at the rank of the
// baseline's quantile lies within the band; for no change that value is the quantile itself.
import { NumericSketch } from "@moorline/sketch";
import { cdfOf, quantilePairs } from "../dist/index.js";
import { CASES, Draws } from "./coverage-cases.mjs";

const SCALE = Number(process.argv[2] ?? 1);
const SEED = 7_301_441;
const CONFIDENCES = [0.95, 0.999];
const SIZES = [
  { n: 100_000, m: 200, draws: 400 },
  { n: 100_000, m: 1000, draws: 400 },
  { n: 100_000, m: 5000, draws: 400 },
  { n: 2000, m: 2000, draws: 2000 },
  { n: 1_000_000, m: 100_000, draws: 60 },
];
/** Draws whose band is also read from the raw values, to tell sketch error from chance in the widths. */
const RAW_DRAWS = 5;
const WIDTH_RANKS = [0.01, 0.5, 0.95, 0.99, 0.999];
const random = new Draws(SEED);
const started = performance.now();

const rows = SIZES.flatMap((size) => CASES.map((law) => measure(law, size)));
const dependent = measureDependent(Math.ceil(200 * SCALE));
const seconds = Math.round((performance.now() - started) / 1000);
console.log(
  JSON.stringify({ seed: SEED, node: process.version, seconds, confidences: CONFIDENCES, rows, dependent }),
);

function measure(law, { n, m, draws: full }) {
  const draws = Math.max(2, Math.round(full * SCALE));
  const held = { same: [0, 0], changed: [0, 0] };
  const widths = WIDTH_RANKS.map(() => []);
  const rawWidths = WIDTH_RANKS.map(() => []);
  for (let draw = 0; draw < draws; draw += 1) {
    const [values, window] = [random.column(n, law.draw), random.column(m, law.draw)];
    const [baseline, same] = [viewOf(values, 500), viewOf(window)];
    if (draw < RAW_DRAWS) {
      const raw = quantilePairs(cdfOf(values), cdfOf(window), { confidence: 0.95 });
      for (const [k, rank] of WIDTH_RANKS.entries()) rawWidths[k].push(widthAt(raw, rank));
    }
    const changed = viewOf(random.column(m, law.changed));
    for (const [i, confidence] of CONFIDENCES.entries()) {
      const pairs = quantilePairs(baseline, same, { confidence });
      if (holds(pairs, (x) => x)) held.same[i] += 1;
      if (holds(quantilePairs(baseline, changed, { confidence }), law.truth)) held.changed[i] += 1;
      if (confidence === 0.95)
        for (const [k, rank] of WIDTH_RANKS.entries()) widths[k].push(widthAt(pairs, rank));
    }
  }
  const row = {
    law: law.name,
    n,
    m,
    draws,
    same: held.same.map((k) => k / draws),
    changed: held.changed.map((k) => k / draws),
    standardError: CONFIDENCES.map((c) => Math.sqrt((c * (1 - c)) / draws)),
    medianWidth95: Object.fromEntries(WIDTH_RANKS.map((rank, k) => [rank, medianOf(widths[k])])),
    rawWidth95: Object.fromEntries(WIDTH_RANKS.map((rank, k) => [rank, medianOf(rawWidths[k])])),
  };
  console.error(
    `${law.name}, ${n} against ${m}: same ${row.same.join(" ")}, changed ${row.changed.join(" ")}; width ${JSON.stringify(row.medianWidth95)}`,
  );
  return row;
}

/** Gaussian AR(1), φ = .9: the band with events taken as independent, and with D from the baseline's own 200 blocks. */
function measureDependent(draws) {
  const [blocks, m] = [200, 1000];
  const held = { independent: [0, 0], blocks: [0, 0] };
  for (let draw = 0; draw < draws; draw += 1) {
    const values = autoregressive(blocks * m);
    const baseline = viewOf(values, 500);
    const production = viewOf(autoregressive(m));
    const designEffect = effectOfBlocks(values, m, blocks);
    for (const [i, confidence] of CONFIDENCES.entries()) {
      if (holds(quantilePairs(baseline, production, { confidence }), (x) => x)) held.independent[i] += 1;
      if (holds(quantilePairs(baseline, production, { confidence, designEffect }), (x) => x))
        held.blocks[i] += 1;
    }
  }
  const share = (counts) => counts.map((k) => k / draws);
  const row = {
    phi: 0.9,
    blocks,
    m,
    draws,
    independent: share(held.independent),
    withDesignEffect: share(held.blocks),
  };
  console.error(`AR(.9), ${blocks} blocks of ${m}: ${JSON.stringify(row)}`);
  return row;
}

function autoregressive(length) {
  const values = new Float64Array(length);
  let level = random.normal();
  for (let i = 0; i < length; i += 1) {
    level = 0.9 * level + Math.sqrt(1 - 0.81) * random.normal();
    values[i] = level;
  }
  return values;
}

/** By rank: variance of the blocks' shares over that of independent events. */
function effectOfBlocks(values, m, blocks) {
  const sorted = values.toSorted();
  return (rank) => {
    const threshold = sorted[Math.floor(rank * values.length)];
    let sum = 0;
    for (let block = 0; block < blocks; block += 1) {
      let below = 0;
      for (let i = block * m; i < (block + 1) * m; i += 1) if (values[i] <= threshold) below += 1;
      sum += (below / m - rank) ** 2;
    }
    return ((sum / (blocks - 1)) * m) / (rank * (1 - rank));
  };
}

function viewOf(values, compression) {
  const sketch = new NumericSketch(compression === undefined ? {} : { compression });
  sketch.addColumn(values);
  return NumericSketch.decode(sketch.encode()).toCdf();
}

function holds(pairs, truth) {
  return pairs.every(({ baseline, low, high }) => {
    if (baseline === null) return true;
    const value = truth(baseline);
    // The slack is for sums of decimals at atoms: 1.3 · 0.25 + 0.2 need not be the same double on both ways.
    const slack = 1e-12 * Math.max(1, Math.abs(value));
    return (low === null || value >= low - slack) && (high === null || value <= high + slack);
  });
}

function widthAt(pairs, rank) {
  const { low, high } = pairs.find((pair) => pair.rank === rank);
  return low === null || high === null ? Number.POSITIVE_INFINITY : high - low;
}

/** Null: the band is open there in half of the draws or more. */
function medianOf(widths) {
  const middle = widths.toSorted((a, b) => a - b)[Math.floor(widths.length / 2)];
  return Number.isFinite(middle) ? Number(middle.toPrecision(4)) : null;
}
