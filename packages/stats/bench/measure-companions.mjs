// What the companions of a comparison claim, by simulation: noise and interval of W1, sizes of Anderson–Darling, coverage and size for rates, noise of PSI and
// Jensen–Shannon, false finds among adjusted p-values.
//   node packages/stats/bench/measure-companions.mjs [--draws 400] [--seed 91301]      after `tsc -b packages/stats`; about a minute and a half
// Talks on stderr, prints one JSON object as the last line of stdout.
import { readFileSync } from "node:fs";
import { parseArgs } from "node:util";
import {
  adjustBenjaminiHochberg,
  adjustBenjaminiYekutieli,
  andersonDarling,
  cdfOf,
  decileBins,
  jensenShannonDistance,
  jensenShannonNoise,
  normalTail,
  normalTwoSided,
  populationStabilityIndex,
  populationStabilityNoise,
  rateChange,
  rateChangePValue,
  TAIL_RANGES,
  wasserstein1,
  wassersteinChange,
  wassersteinNoise,
} from "../dist/index.js";

const { values: options } = parseArgs({
  options: { draws: { type: "string", default: "400" }, seed: { type: "string", default: "91301" } },
});
const draws = Number(options.draws);
const seed = Number(options.seed);

let state = seed >>> 0;
/** Uniform in (0, 1), mulberry32. */
function uniform() {
  state = (state + 0x6d2b79f5) >>> 0;
  let t = state;
  t = Math.imul(t ^ (t >>> 15), t | 1);
  t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
  return (((t ^ (t >>> 14)) >>> 0) + 0.5) / 4294967296;
}

const normal = () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
const FAMILIES = {
  normal,
  lognormal: () => Math.exp(normal()),
  t3: () => normal() / Math.sqrt((normal() ** 2 + normal() ** 2 + normal() ** 2) / 3),
  "30 % zeros": () => (uniform() < 0.3 ? 0 : normal()),
};

const sample = (length, draw) => cdfOf(Float64Array.from({ length }, draw));
const mean = (values) => values.reduce((a, b) => a + b, 0) / values.length;
const quantile = (values, rank) => values.toSorted((a, b) => a - b)[Math.floor(rank * values.length)];
const round = (value) => Number(value.toPrecision(3));
const shareOf = (values, holds) => round(values.filter(holds).length / values.length);
const told = (name, figures) => {
  console.error(`${name}: ${JSON.stringify(figures)}`);
  return figures;
};

/** W1 without a change: its mean over the formula, and its upper percents over its mean. */
function noiseOf(family, m) {
  const draw = FAMILIES[family];
  const found = { all: [], tail: [] };
  const expected = { all: [], tail: [] };
  for (let i = 0; i < draws; i += 1) {
    const baseline = sample(20_000, draw);
    const production = sample(m, draw);
    found.all.push(wasserstein1(baseline, production));
    found.tail.push(wasserstein1(baseline, production, TAIL_RANGES.upper));
    expected.all.push(wassersteinNoise({ baseline, m }));
    expected.tail.push(wassersteinNoise({ baseline, m, range: TAIL_RANGES.upper }));
  }
  const figures = (part, factor) => ({
    meanOverFormula: round(mean(found[part]) / mean(expected[part])),
    q99OverFormula: round(quantile(found[part], 0.99) / mean(expected[part])),
    aboveNoise: shareOf(found[part], (_, i) => found[part][i] > factor * expected[part][i]),
  });
  return told(`noise ${family} m=${m}`, { all: figures("all", 2.4), tail: figures("tail", 3.6) });
}

const CHANGES = {
  "shift .2": (x) => x + 0.2,
  "scale 1.3": (x) => 1.3 * x,
  both: (x) => 0.2 + 1.3 * x,
};

/** The interval of W1: its coverage among the draws that are above noise, and how many are. */
function coverageOf(family, change, m) {
  const draw = FAMILIES[family];
  const changed = () => CHANGES[change](draw());
  const truths = { all: [], tail: [] };
  for (let i = 0; i < 12; i += 1) {
    const [a, b] = [sample(200_000, draw), sample(200_000, changed)];
    truths.all.push(wasserstein1(a, b));
    truths.tail.push(wasserstein1(a, b, TAIL_RANGES.upper));
  }
  const figures = {};
  for (const [part, range] of [
    ["all", undefined],
    ["tail", TAIL_RANGES.upper],
  ]) {
    const truth = mean(truths[part]);
    const results = Array.from({ length: Math.ceil(draws / 2) }, () =>
      wassersteinChange(sample(20_000, draw), sample(m, changed), range === undefined ? {} : { range }),
    );
    const shown = results.filter(({ interval }) => interval !== null);
    figures[part] = {
      aboveNoise: round(shown.length / results.length),
      coverage:
        shown.length < 20
          ? null
          : shareOf(shown, ({ interval: [low, high] }) => low <= truth && truth <= high),
    };
  }
  return told(`interval ${family} ${change} m=${m}`, figures);
}

function andersonDarlingSizes(n, m, repeats, draw) {
  const found = Array.from(
    { length: repeats },
    () => andersonDarling(sample(n, draw), sample(m, draw)).pValue,
  );
  return told(
    `Anderson–Darling ${n}/${m}`,
    [0.05, 0.01, 0.001].map((level) => shareOf(found, (p) => p <= level)),
  );
}

function binomial(trials, share) {
  let events = 0;
  for (let i = 0; i < trials; i += 1) if (uniform() < share) events += 1;
  return { events, trials };
}

function ratesOf(share, n, m) {
  const repeats = draws * 10;
  const found = Array.from({ length: repeats }, () => {
    const [before, now] = [binomial(n, share), binomial(m, share)];
    return { ...rateChange(before, now), pValue: rateChangePValue(before, now) };
  });
  return told(`rates ${share} ${n}/${m}`, {
    coverage: shareOf(found, ({ interval: [low, high] }) => low <= 0 && 0 <= high),
    oneSidedZ: [0.05, 0.001].map((level) => shareOf(found, ({ z }) => z > 0 && normalTail(z) <= level)),
    pValue: [0.05, 0.001].map((level) => shareOf(found, ({ pValue }) => pValue <= level)),
  });
}

function indicesOf(m) {
  const baseline = sample(20_000, normal);
  const bins = Array.from({ length: draws * 3 }, () => decileBins(baseline, sample(m, normal)));
  const level = { bins: 10, n: 20_000, m };
  return told(
    `indices m=${m}`,
    Object.fromEntries(
      [
        ["psi", populationStabilityIndex, populationStabilityNoise(level)],
        ["jensenShannon", jensenShannonDistance, jensenShannonNoise(level)],
      ].map(([name, index, noise]) => {
        const values = bins.map(index);
        const above = [noise.upper95, noise.upper99].map((limit) => shareOf(values, (v) => v > limit));
        return [name, { mean: round(mean(values)), expected: round(noise.expected), above95And99: above }];
      }),
    ),
  );
}

/** 500 features, 25 of them moved by `shift` deviations; a common factor makes the rest depend on each other. */
function findsOf(correlation, shift) {
  const finds = { hochberg: [0, 0], yekutieli: [0, 0] };
  for (let i = 0; i < draws; i += 1) {
    const common = Math.sqrt(correlation) * normal();
    const values = Array.from({ length: 500 }, (_, f) =>
      normalTwoSided(common + Math.sqrt(1 - correlation) * normal() + (f < 25 ? shift : 0)),
    );
    for (const [name, adjust] of [
      ["hochberg", adjustBenjaminiHochberg],
      ["yekutieli", adjustBenjaminiYekutieli],
    ]) {
      const found = adjust(values).flatMap((p, f) => (p <= 0.05 ? [f] : []));
      const wrong = found.filter((f) => f >= 25).length;
      finds[name][0] += found.length === 0 ? 0 : wrong / found.length / draws;
      finds[name][1] += (found.length - wrong) / 25 / draws;
    }
  }
  const rounded = Object.fromEntries(Object.entries(finds).map(([name, pair]) => [name, pair.map(round)]));
  return told(`finds rho=${correlation}: [false share, power]`, rounded);
}

const started = performance.now();
const noise = Object.keys(FAMILIES).flatMap((family) =>
  [200, 1000, 5000].map((m) => ({ family, m, ...noiseOf(family, m) })),
);
const interval = Object.keys(FAMILIES).flatMap((family) =>
  Object.keys(CHANGES).map((change) => ({ family, change, m: 1000, ...coverageOf(family, change, 1000) })),
);
const rounded = () => Math.round(3 * normal()) / 3;
const andersonDarlingSize = [
  { n: 15, m: 12, sizes: andersonDarlingSizes(15, 12, draws * 40, normal) },
  { n: 100, m: 80, sizes: andersonDarlingSizes(100, 80, draws * 20, normal) },
  { n: 1000, m: 200, sizes: andersonDarlingSizes(1000, 200, draws * 8, normal) },
  { n: 1000, m: 200, rounded: true, sizes: andersonDarlingSizes(1000, 200, draws * 8, rounded) },
];
const rates = [
  [0.001, 10_000, 1000],
  [0.01, 10_000, 200],
  [0.01, 1000, 1000],
  [0.2, 1000, 200],
].map(([share, n, m]) => ({ share, n, m, ...ratesOf(share, n, m) }));
const indices = [50, 200, 1000].map((m) => ({ m, ...indicesOf(m) }));
const finds = [0, 0.5].map((correlation) => ({ correlation, ...findsOf(correlation, 4.74) }));
const { version } = JSON.parse(readFileSync(new URL("../package.json", import.meta.url), "utf8"));
console.log(
  JSON.stringify({
    measure: "companions",
    draws,
    seed,
    noise,
    interval,
    andersonDarlingSize,
    rates,
    indices,
    finds,
    seconds: Math.round((performance.now() - started) / 1000),
    versions: { node: process.version, stats: version },
  }),
);
