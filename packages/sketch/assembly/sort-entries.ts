import { keyOf, toOffsets } from "./sort-key";

/** Bits of a digit; a merge sorts tens of thousands of entries, so that 2,048 counters are few. */
const DIGIT_BITS: u64 = 11;
const BUCKETS: i32 = 2048;
const DIGIT_MASK: u64 = 2047;

const FULL_PASSES = 6;
/** Passes over the top digits of key − least key, before the fix-up. */
const TOP_PASSES = 2;
const histograms: usize = memory.data(6 * 2048 * 4);

/** With fewer ascending runs than this they are merged, two by two; with more the keys are sorted by radix. */
const MOST_RUNS = 16;
const runStarts: usize = memory.data((MOST_RUNS + 1) * 4);

const MOVES_PER_ENTRY = 8;

/** Sorts entries by mean, stable: equal means keep the order in which their sketches were given. */
export function sortEntries(
  means: usize,
  weights: usize,
  meanScratch: usize,
  weightScratch: usize,
  count: i32,
): void {
  const runs = findRuns(means, count);
  if (runs <= 1) return;
  if (runs <= MOST_RUNS) {
    mergeRunsInPairs(means, weights, meanScratch, weightScratch, runs);
    return;
  }
  const bytes = (<usize>count) << 3;
  let least: u64 = u64.MAX_VALUE;
  let greatest: u64 = 0;
  for (let at: usize = 0; at < bytes; at += 8) {
    const key = keyOf(load<u64>(means + at));
    least = key < least ? key : least;
    greatest = key > greatest ? key : greatest;
  }
  const rangeBits = 64 - clz<u64>(greatest - least);
  const shift: u64 = rangeBits > TOP_PASSES * DIGIT_BITS ? rangeBits - TOP_PASSES * DIGIT_BITS : 0;
  sortDigits(means, weights, meanScratch, weightScratch, bytes, least, shift, TOP_PASSES);
  if (shift > 0 && !insertionSort(means, weights, bytes, count * MOVES_PER_ENTRY)) {
    sortDigits(means, weights, meanScratch, weightScratch, bytes, 0, 0, FULL_PASSES);
  }
}

/** Notes where ascending runs start, at most MOST_RUNS of them; gives their number, or more than MOST_RUNS. */
function findRuns(means: usize, count: i32): i32 {
  let runs = 0;
  let before: f64 = Infinity;
  for (let i = 0; i < count; i++) {
    const mean = load<f64>(means + ((<usize>i) << 3));
    if (i === 0 || mean < before) {
      if (runs === MOST_RUNS) return MOST_RUNS + 1;
      store<i32>(runStarts + ((<usize>runs) << 2), i);
      runs++;
    }
    before = mean;
  }
  if (runs <= MOST_RUNS) store<i32>(runStarts + ((<usize>runs) << 2), count);
  return runs;
}

function mergeRunsInPairs(
  means: usize,
  weights: usize,
  meanScratch: usize,
  weightScratch: usize,
  runs: i32,
): void {
  let fromMeans = means;
  let fromWeights = weights;
  let toMeans = meanScratch;
  let toWeights = weightScratch;
  const bytes = (<usize>load<i32>(runStarts + ((<usize>runs) << 2))) << 3;
  let left = runs;
  while (left > 1) {
    let written = 0;
    for (let run = 0; run < left; run += 2) {
      const start = load<i32>(runStarts + ((<usize>run) << 2));
      const middle = load<i32>(runStarts + ((<usize>(run + 1)) << 2));
      const end = run + 1 < left ? load<i32>(runStarts + ((<usize>(run + 2)) << 2)) : middle;
      mergePair(fromMeans, fromWeights, toMeans, toWeights, start, middle, end);
      store<i32>(runStarts + ((<usize>written) << 2), start);
      written++;
    }
    store<i32>(runStarts + ((<usize>written) << 2), <i32>(bytes >> 3));
    left = written;
    const swapMeans = fromMeans;
    fromMeans = toMeans;
    toMeans = swapMeans;
    const swapWeights = fromWeights;
    fromWeights = toWeights;
    toWeights = swapWeights;
  }
  if (fromMeans !== means) {
    memory.copy(means, fromMeans, bytes);
    memory.copy(weights, fromWeights, bytes);
  }
}

function mergePair(
  fromMeans: usize,
  fromWeights: usize,
  toMeans: usize,
  toWeights: usize,
  start: i32,
  middle: i32,
  end: i32,
): void {
  let a = (<usize>start) << 3;
  let b = (<usize>middle) << 3;
  const aEnd = b;
  const bEnd = (<usize>end) << 3;
  for (let to = a; to < bEnd; to += 8) {
    const takeA = b >= bEnd || (a < aEnd && load<f64>(fromMeans + a) <= load<f64>(fromMeans + b));
    const from = takeA ? a : b;
    store<f64>(toMeans + to, load<f64>(fromMeans + from));
    store<f64>(toWeights + to, load<f64>(fromWeights + from));
    if (takeA) a += 8;
    else b += 8;
  }
}

/** Radix sort by `passes` digits of (key − least) >> shift, lowest first. */
function sortDigits(
  means: usize,
  weights: usize,
  meanScratch: usize,
  weightScratch: usize,
  bytes: usize,
  least: u64,
  shift: u64,
  passes: i32,
): void {
  let fromMeans = means;
  let fromWeights = weights;
  let toMeans = meanScratch;
  let toWeights = weightScratch;
  memory.fill(histograms, 0, passes * BUCKETS * 4);
  for (let at: usize = 0; at < bytes; at += 8) {
    let digits = (keyOf(load<u64>(means + at)) - least) >> shift;
    for (let pass = 0; pass < passes; pass++) {
      const slot = histograms + ((<usize>(pass * BUCKETS + <i32>(digits & DIGIT_MASK))) << 2);
      store<u32>(slot, load<u32>(slot) + 1);
      digits >>= DIGIT_BITS;
    }
  }
  for (let pass = 0; pass < passes; pass++) {
    const histogram = histograms + ((<usize>(pass * BUCKETS)) << 2);
    const digitShift = shift + <u64>pass * DIGIT_BITS;
    toOffsets(histogram, BUCKETS);
    for (let at: usize = 0; at < bytes; at += 8) {
      const bits = load<u64>(fromMeans + at);
      const slot = histogram + ((<usize>(((keyOf(bits) - least) >> digitShift) & DIGIT_MASK)) << 2);
      const offset = <usize>load<u32>(slot);
      store<u64>(toMeans + offset, bits);
      store<u64>(toWeights + offset, load<u64>(fromWeights + at));
      store<u32>(slot, <u32>offset + 8);
    }
    const swapMeans = fromMeans;
    fromMeans = toMeans;
    toMeans = swapMeans;
    const swapWeights = fromWeights;
    fromWeights = toWeights;
    toWeights = swapWeights;
  }
  if (fromMeans !== means) {
    memory.copy(means, fromMeans, bytes);
    memory.copy(weights, fromWeights, bytes);
  }
}

function insertionSort(means: usize, weights: usize, bytes: usize, most: i32): bool {
  let moves = 0;
  for (let at: usize = 8; at < bytes; at += 8) {
    const mean = load<f64>(means + at);
    const weight = load<f64>(weights + at);
    let to = at;
    while (to > 0 && load<f64>(means + to - 8) > mean) {
      store<f64>(means + to, load<f64>(means + to - 8));
      store<f64>(weights + to, load<f64>(weights + to - 8));
      to -= 8;
      moves++;
    }
    store<f64>(means + to, mean);
    store<f64>(weights + to, weight);
    if (moves > most) return false;
  }
  return true;
}
