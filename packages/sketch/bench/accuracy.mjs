// Rank errors of a sketch and of its peers on one sample; medians over seeds where there are several.
import { TDigest } from "tdigest";
import { NumericSketch } from "../dist/index.js";
import { quantileErrors, RANKS, supError } from "./rank-error.mjs";
import { median, sampleOf } from "./samples.mjs";

const DAY_MINUTES = 1_440;

/** A sketch of a sample: of all values in turn, or of 1,440 sealed minutes merged at once. */
function sketchOf(sample, parts) {
  const size = Math.floor(sample.length / parts);
  const sketches = Array.from({ length: parts }, (_, i) => {
    const sketch = new NumericSketch();
    sketch.addColumn(sample.subarray(i * size, (i + 1) * size));
    return parts === 1 ? sketch : NumericSketch.decode(sketch.encode());
  });
  return parts === 1 ? sketches[0] : NumericSketch.merge(sketches);
}

export function errorsOf(sketch, sorted) {
  const knots = sketch.toCdf();
  return {
    clusters: knots.values.length,
    supStrict: supError(sorted, knots),
    ...quantileErrors(
      sorted,
      RANKS.map((rank) => sketch.quantile(rank)),
    ),
  };
}

/** Live and sealed errors of one sample. */
export function ownErrors(sample, sorted, parts) {
  const live = sketchOf(sample, parts);
  const sealed = NumericSketch.decode(live.encode());
  return { live: errorsOf(live, sorted), sealed: errorsOf(sealed, sorted) };
}

function npmErrors(sample, sorted) {
  const digest = new TDigest(0.01);
  for (let i = 0; i < sample.length; i++) digest.push(sample[i]);
  const quantiles = digest.percentile([...RANKS]);
  return { clusters: digest.size(), ...quantileErrors(sorted, quantiles) };
}

async function javaErrors(java, sample, sorted, parts) {
  await java.load(sample);
  const [centroids, ...quantiles] = (await java.ask(`quantiles ${parts} ${RANKS.join(",")}`)).split(",");
  return { clusters: Number(centroids), ...quantileErrors(sorted, quantiles.map(Number)) };
}

export const ACCURACY_ROWS = [
  { name: "uniform", n: 1_000_000, parts: 1, kind: "iid" },
  { name: "lognormal", n: 1_000_000, parts: 1, kind: "iid" },
  { name: "pareto", n: 1_000_000, parts: 1, kind: "iid" },
  { name: "diurnal", n: 1_000_000, parts: 1, kind: "order" },
  { name: "10 distinct", n: 1_000_000, parts: 1, kind: "distinct" },
  { name: "70 % zeros", n: 1_000_000, parts: 1, kind: "zeros" },
  { name: "two far modes", n: 1_000_000, parts: 1, kind: "far" },
  { name: "lognormal", n: DAY_MINUTES * 2_000, parts: DAY_MINUTES, kind: "merge" },
  { name: "diurnal", n: DAY_MINUTES * 2_000, parts: DAY_MINUTES, kind: "merge" },
];

/** One row: medians over the seeds; peers on the first seed only, for they are slow. */
export async function measureAccuracy(row, seeds, java, say) {
  const own = [];
  let peers = {};
  for (let seed = 1; seed <= seeds; seed++) {
    const sample = sampleOf(row.name, row.n, seed);
    const sorted = sample.slice().sort();
    own.push(ownErrors(sample, sorted, row.parts));
    if (seed > 1) continue;
    if (row.parts === 1) peers = { npmTdigest: npmErrors(sample, sorted) };
    if (java) peers.javaMergingDigest = await javaErrors(java, sample, sorted, row.parts);
  }
  const figures = { ...row, live: medians(own, "live"), sealed: medians(own, "sealed"), ...peers };
  say(`rank error, ${row.name}${row.parts > 1 ? ` in ${row.parts} parts` : ""}: ${JSON.stringify(figures)}`);
  return figures;
}

function medians(list, key) {
  const names = Object.keys(list[0][key]);
  const rounded = (value) => Number(value.toPrecision(3));
  return Object.fromEntries(names.map((name) => [name, rounded(median(list.map((one) => one[key][name])))]));
}
