// Writes the golden files of the sketch format, version 1, with what must be read from them (golden.json).
// Run once for a new version of the format, after `tsc -b packages/sketch`; files of an old version are never written again.
//   node packages/sketch/test/golden/write-golden.mjs
import { existsSync, writeFileSync } from "node:fs";
import { NumericSketch } from "../../dist/index.js";

// A linear congruential sequence (Park & Miller 1988), so that the input needs no file.
function sequence(length, of) {
  let state = 20_190_204;
  return Array.from({ length }, () => {
    state = (state * 48_271) % 2_147_483_647;
    return of(state / 2_147_483_647);
  });
}

function sketchOf(values, options = {}) {
  const sketch = new NumericSketch(options);
  for (const value of values) sketch.add(value);
  return sketch;
}

const thresholds = { id: "sha256:0f3a", values: [-1.5, 0, 0.25, 3] };
const kinds = sketchOf([1, Number.NaN, Infinity, -Infinity, -Infinity, 2.5, 2.5, -0], { thresholds });
kinds.addMissing(300);
const smooth = sketchOf(sequence(20_000, (u) => Math.round(-1e6 * Math.log(1 - u)) / 1e6 + u * 1e-7));
const zeros = sketchOf(
  sequence(20_000, (u) => (u < 0.7 ? 0 : (u - 0.7) * 10)),
  { thresholds, knownAtoms: [-5, 0, 1] },
);
const far = sketchOf(sequence(20_000, (u) => (u < 0.5 ? u : 1e9 + u)));
const halves = [smooth, far].map((sketch) => NumericSketch.decode(sketch.encode()));

const files = {
  "empty-v1": new NumericSketch({ thresholds, knownAtoms: [7] }),
  "kinds-v1": kinds,
  "exact-v1": sketchOf(sequence(200, (u) => Math.floor(u * 50) / 4)),
  "extremes-v1": sketchOf([Number.MAX_VALUE, -Number.MAX_VALUE, 5e-324, 0]),
  "smooth-v1": smooth,
  "zeros-v1": zeros,
  "merged-v1": NumericSketch.merge(halves),
};

const readings = {};
for (const [name, sketch] of Object.entries(files)) {
  const path = new URL(`${name}.sketch`, import.meta.url);
  if (existsSync(path)) throw new Error(`${path.pathname} exists: golden files are kept for ever`);
  const bytes = sketch.encode();
  writeFileSync(path, bytes);
  const read = NumericSketch.decode(bytes);
  const ranks = read.counts.finite > 0 ? [0, 0.001, 0.25, 0.5, 0.9, 0.999, 1] : [];
  readings[name] = {
    bytes: bytes.length,
    counts: read.counts,
    min: read.min,
    max: read.max,
    sum: read.sum,
    exact: read.exact,
    compression: read.compression,
    thresholds: read.thresholdCounts(),
    atoms: read.atoms(),
    knots: read.toCdf().values.length,
    quantiles: ranks.map((rank) => [rank, read.quantile(rank)]),
  };
}
writeFileSync(new URL("golden.json", import.meta.url), `${JSON.stringify(readings, null, 1)}\n`);
