// Speed: every contender runs once in each round, rounds interleaved; CPU time; medians.
import { TDigest } from "tdigest";
import { flushSorted } from "../dist/flush.js";
import { NumericSketch } from "../dist/index.js";
import { activeKernel } from "../dist/kernel/active-kernel.js";
import { SketchState } from "../dist/sketch-state.js";
import { median, sampleOf } from "./samples.mjs";

export const SPEED_SAMPLES = ["uniform", "lognormal", "70 % zeros"];
const VALUES = 1_000_000;
/** npm tdigest takes some 0.6 µs a value. */
const SLOW_VALUES = 300_000;
const MERGED = 200;
const MERGED_VALUES = 5_000;

function cpuNanos(work) {
  const before = process.cpuUsage();
  const answer = work();
  const { user, system } = process.cpuUsage(before);
  // Read, so that no compiler may leave the work out.
  if (Number.isNaN(answer)) throw new Error("a contender answered NaN");
  return (user + system) * 1_000;
}

function note(runs, name, nanos, round) {
  if (round < 0) return;
  runs[name] ??= [];
  runs[name].push(nanos);
}

function chunks(values, size, work) {
  for (let at = 0; at + size <= values.length; at += size) work(values.subarray(at, at + size));
  return 0;
}

function sortFloor(values, size) {
  const kernel = activeKernel();
  kernel.reserve(size, 0);
  return chunks(values, size, (chunk) => {
    kernel.values.set(chunk);
    kernel.sortValues(size);
  });
}

/** What addColumn does, with flushes of another size than the one it has. */
function addWithFlushOf(values, size) {
  const kernel = activeKernel();
  const state = new SketchState(200, null, []);
  chunks(values, size, (chunk) => {
    kernel.reserve(size, state.size + 64);
    kernel.values.set(chunk);
    kernel.sortValues(size);
    flushSorted(state, kernel, size);
  });
  return state.size;
}

function typedArraySort(values) {
  const buffer = new Float64Array(1_024);
  return chunks(values, 1_024, (chunk) => {
    buffer.set(chunk);
    buffer.sort();
  });
}

function addColumn(values) {
  const sketch = new NumericSketch();
  sketch.addColumn(values);
  return sketch.counts.finite;
}

function addEach(values) {
  const sketch = new NumericSketch();
  for (let i = 0; i < values.length; i++) sketch.add(values[i]);
  return sketch.counts.finite;
}

function npmTdigest(values) {
  const digest = new TDigest(0.01);
  for (let i = 0; i < SLOW_VALUES; i++) digest.push(values[i]);
  return digest.size();
}

const CONTENDERS = {
  column: (values) => cpuNanos(() => addColumn(values)) / VALUES,
  columnFlush1024: (values) => cpuNanos(() => addWithFlushOf(values, 1_024)) / VALUES,
  columnFlush2048: (values) => cpuNanos(() => addWithFlushOf(values, 2_048)) / VALUES,
  columnFlush4096: (values) => cpuNanos(() => addWithFlushOf(values, 4_096)) / VALUES,
  value: (values) => cpuNanos(() => addEach(values)) / VALUES,
  sortFloor1024: (values) => cpuNanos(() => sortFloor(values, 1_024)) / VALUES,
  sortFloor2048: (values) => cpuNanos(() => sortFloor(values, 2_048)) / VALUES,
  sortFloor4096: (values) => cpuNanos(() => sortFloor(values, 4_096)) / VALUES,
  typedArraySort1024: (values) => cpuNanos(() => typedArraySort(values)) / VALUES,
  npmTdigest: (values) => cpuNanos(() => npmTdigest(values)) / SLOW_VALUES,
};

/** Nanoseconds a value by sample and contender. */
export async function measureAdd(rounds, java, say) {
  const figures = {};
  for (const name of SPEED_SAMPLES) {
    const values = sampleOf(name, VALUES, 11);
    const runs = {};
    if (java) await java.load(values);
    for (let round = -1; round < rounds; round++) {
      for (const [contender, run] of Object.entries(CONTENDERS)) {
        note(runs, contender, run(values), round);
      }
      if (java) note(runs, "javaMergingDigest", Number(await java.ask("add")), round);
    }
    figures[name] = mediansOf(runs);
    say(`add, ns a value, ${name}: ${JSON.stringify(figures[name])}`);
  }
  return figures;
}

/** Merging and looking up, on lognormal values. */
export async function measureMergeAndQuantile(rounds, java, say) {
  const values = sampleOf("lognormal", MERGED * MERGED_VALUES, 12);
  const parts = Array.from({ length: MERGED }, (_, i) => {
    const part = new NumericSketch();
    part.addColumn(values.subarray(i * MERGED_VALUES, (i + 1) * MERGED_VALUES));
    return NumericSketch.decode(part.encode());
  });
  const whole = new NumericSketch();
  whole.addColumn(values);
  const sealed = NumericSketch.decode(whole.encode());
  const runs = {};
  if (java) await java.load(values);
  for (let round = -WARM_ROUNDS; round < rounds; round++) {
    note(runs, "pairwiseUs", cpuNanos(() => foldOf(parts)) / MERGED / 1_000, round);
    note(runs, "kWayUs", cpuNanos(() => NumericSketch.merge(parts).counts.finite) / MERGED / 1_000, round);
    note(runs, "quantileNs", cpuNanos(() => quantiles(sealed)) / CALLS, round);
    note(runs, "encodeUs", cpuNanos(() => repeat(200, () => whole.encode().length)) / 200_000, round);
    note(runs, "decodeUs", cpuNanos(() => decodeAll(whole.encode())) / 200_000, round);
    if (!java) continue;
    note(runs, "javaPairwiseUs", Number(await java.ask(`merge ${MERGED} compress`)) / 1_000, round);
    note(runs, "javaLazyFoldUs", Number(await java.ask(`merge ${MERGED} lazy`)) / 1_000, round);
    note(runs, "javaQuantileNs", Number(await java.ask("quantile")), round);
  }
  const figures = { ...mediansOf(runs), sealedBytes: whole.encode().length };
  say(`merge and quantile: ${JSON.stringify(figures)}`);
  return figures;
}

/** V8 and the JVM take some rounds until they have compiled for good. */
const WARM_ROUNDS = 12;
const CALLS = 200_000;

function foldOf(parts) {
  let merged = parts[0];
  for (let i = 1; i < parts.length; i++) merged = NumericSketch.merge([merged, parts[i]]);
  return merged.counts.finite;
}

function quantiles(sketch) {
  let sum = 0;
  for (let i = 0; i < CALLS; i++) sum += sketch.quantile(((i % 997) + 0.5) / 997);
  return sum;
}

function decodeAll(bytes) {
  return repeat(200, () => NumericSketch.decode(bytes).counts.finite);
}

function repeat(times, work) {
  let sum = 0;
  for (let i = 0; i < times; i++) sum += work();
  return sum;
}

function mediansOf(runs) {
  return Object.fromEntries(Object.entries(runs).map(([name, list]) => [name, round3(median(list))]));
}

function round3(value) {
  return Number(value.toPrecision(4));
}
