/** Sums of distances are kept this much smaller, so that they overflow only for clusters wider than MAX_VALUE. */
const SUM_SCALE: f64 = 1.0 / 1099511627776.0;

/** One unit of k for a cluster that starts after `done`, by the midpoint rule. */
// @ts-ignore: decorators are AssemblyScript
@inline
function unitAfter(done: f64, total: f64, middle: f64, tail: f64): f64 {
  const q = done / total;
  const p = q * (1.0 - q);
  const r = q + (0.5 * p) / (middle * sqrt<f64>(p) + tail);
  const s = r * (1.0 - r);
  if (!(s > 0.0)) return 0.0;
  return (total * s) / (middle * sqrt<f64>(s) + tail);
}

// @ts-ignore: decorators are AssemblyScript
@inline
function centreOf(first: f64, last: f64, sum: f64, weight: f64): f64 {
  const centre = first + sum / weight / SUM_SCALE;
  if (!(centre < Infinity)) return first * 0.5 + last * 0.5;
  return centre > last ? last : centre;
}

/** The twin of src/kernel/merge-pass.ts, which explains it: the same operations in the same order. */
export function mergePass(
  values: usize,
  valueCount: i32,
  means: usize,
  weights: usize,
  entryCount: i32,
  outMeans: usize,
  outWeights: usize,
  edges: usize,
  edgeCount: i32,
  descending: bool,
  total: f64,
  middle: f64,
  tail: f64,
  growth: f64,
  decay: f64,
): i32 {
  return descending
    ? pass<i32>(values, valueCount, means, weights, entryCount, outMeans, outWeights, edges, edgeCount, total, middle, tail, growth, decay)
    : pass<f64>(values, valueCount, means, weights, entryCount, outMeans, outWeights, edges, edgeCount, total, middle, tail, growth, decay);
}

/** D = f64: ascending; D = i32: descending. A type parameter makes two functions without a test of the direction inside. */
function pass<D>(
  values: usize,
  valueCount: i32,
  means: usize,
  weights: usize,
  entryCount: i32,
  outMeans: usize,
  outWeights: usize,
  edges: usize,
  edgeCount: i32,
  total: f64,
  middle: f64,
  tail: f64,
  growth: f64,
  decay: f64,
): i32 {
  const descending = isInteger<D>();
  let entry = descending ? means + (<usize>entryCount << 3) - 8 : means;
  let next = descending ? values + (<usize>valueCount << 3) - 8 : values;
  const toWeight: usize = weights - means;
  let entriesLeft = entryCount;
  let valuesLeft = valueCount;
  let count: usize = 0;
  let done: f64 = 0;
  let first: f64 = 0;
  let last: f64 = 0;
  let weight: f64 = 0;
  let sum: f64 = 0;
  let pure = true;
  let limit: f64 = 0;
  let edge = 0;
  let behind: f64 = -Infinity;
  let ahead: f64 = Infinity;
  if (edgeCount > 0) {
    ahead = descending ? total - load<f64>(edges + ((<usize>edgeCount - 1) << 3)) : load<f64>(edges);
  }
  let mean: f64 = Infinity;
  let value: f64 = Infinity;
  if (entriesLeft > 0) mean = descending ? -load<f64>(entry) : load<f64>(entry);
  if (valuesLeft > 0) value = descending ? -load<f64>(next) : load<f64>(next);
  while (true) {
    let x = value;
    let w: f64 = 1.0;
    if (mean <= value) {
      if (entriesLeft == 0) break; // both are at infinity
      x = mean;
      w = load<f64>(entry + toWeight);
      entriesLeft--;
      if (descending) entry -= 8;
      else entry += 8;
      mean = Infinity;
      if (entriesLeft > 0) mean = descending ? -load<f64>(entry) : load<f64>(entry);
    } else {
      valuesLeft--;
      if (descending) next -= 8;
      else next += 8;
      value = Infinity;
      if (valuesLeft > 0) value = descending ? -load<f64>(next) : load<f64>(next);
    }
    const single = w > 0.0;
    if (!single) w = -w;
    const same = pure && single && x == first;
    if (weight + w <= limit || (same && weight > 0.0)) {
      weight += w;
      sum += (x - first) * (w * SUM_SCALE);
      pure = same;
      last = x;
      continue;
    }
    if (weight > 0.0) {
      const centre = centreOf(first, last, sum, weight);
      store<f64>(outMeans + (count << 3), (descending ? -centre : centre) + 0.0);
      store<f64>(outWeights + (count << 3), pure ? weight : -weight);
      count++;
      done += weight;
    }
    first = x;
    last = x;
    weight = w;
    sum = 0;
    pure = single;
    while (ahead <= done) {
      behind = ahead;
      edge++;
      ahead = Infinity;
      if (edge < edgeCount) {
        const at = descending ? edgeCount - 1 - edge : edge;
        const rank = load<f64>(edges + (<usize>at << 3));
        ahead = descending ? total - rank : rank;
      }
    }
    limit = unitAfter(done, total, middle, tail);
    if (edgeCount > 0) {
      const byGrowth = (done - behind) * growth;
      const byDecay = (ahead - done) * decay;
      if (byGrowth < limit) limit = byGrowth;
      if (byDecay < limit) limit = byDecay;
    }
  }
  if (weight > 0.0) {
    const centre = centreOf(first, last, sum, weight);
    store<f64>(outMeans + (count << 3), (descending ? -centre : centre) + 0.0);
    store<f64>(outWeights + (count << 3), pure ? weight : -weight);
    count++;
  }
  return <i32>count;
}
