/** Sums of distances are kept this much smaller, so that they overflow only for clusters wider than MAX_VALUE. */
const SUM_SCALE: f64 = 1.0 / 1099511627776.0;
const SUM_UNSCALE: f64 = 1099511627776.0;

/** One unit of k for a cluster that starts after `done`: the unit at the start and half of its change over its own width. */
function unitAfter(done: f64, perEvent: f64, total: f64, middle: f64, tail: f64): f64 {
  const q = done * perEvent;
  const p = q * (1.0 - q);
  if (!(p > 0.0)) return 0.0;
  const bend = middle * sqrt<f64>(p);
  const inverse = 1.0 / (bend + tail);
  const unit = p * inverse;
  const slope = (0.5 * bend + tail) * (inverse * inverse) * (1.0 - 2.0 * q);
  return total * (unit * (1.0 + 0.5 * slope));
}

function centreOf(first: f64, last: f64, sum: f64, weight: f64): f64 {
  const centre = first + (sum / weight) * SUM_UNSCALE;
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
    ? pass<i32>(
        values,
        valueCount,
        means,
        weights,
        entryCount,
        outMeans,
        outWeights,
        edges,
        edgeCount,
        total,
        middle,
        tail,
        growth,
        decay,
      )
    : pass<f64>(
        values,
        valueCount,
        means,
        weights,
        entryCount,
        outMeans,
        outWeights,
        edges,
        edgeCount,
        total,
        middle,
        tail,
        growth,
        decay,
      );
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
  const perEvent = 1.0 / total;
  const outEnd = (<usize>(entryCount + valueCount)) << 3;
  const step: usize = descending ? -8 : 8;
  const toWeight: usize = weights - means;
  const toOutWeight: usize = outWeights - outMeans;
  let entry = descending ? means + ((<usize>entryCount) << 3) - 8 : means;
  let next = descending ? values + ((<usize>valueCount) << 3) - 8 : values;
  let out = descending ? outMeans + outEnd - 8 : outMeans;
  const entriesEnd = descending ? means - 8 : means + ((<usize>entryCount) << 3);
  const valuesEnd = descending ? values - 8 : values + ((<usize>valueCount) << 3);
  // Infinity stands after the last value and entry, so that nobody need ask whether there is another.
  store<f64>(entriesEnd, descending ? -Infinity : Infinity);
  store<f64>(valuesEnd, descending ? -Infinity : Infinity);
  let mean: f64 = descending ? -load<f64>(entry) : load<f64>(entry);
  let value: f64 = descending ? -load<f64>(next) : load<f64>(next);
  let count = 0;
  let done: f64 = 0;
  let edge = 0;
  let behind: f64 = -Infinity;
  let ahead: f64 = edgeAt(edges, edgeCount, 0, descending, total);
  while (entry !== entriesEnd || next !== valuesEnd) {
    let first = value;
    let weight: f64 = 1.0;
    let pure = true;
    if (mean <= value) {
      first = mean;
      weight = load<f64>(entry + toWeight);
      pure = weight > 0.0;
      if (!pure) weight = -weight;
      entry += step;
      mean = descending ? -load<f64>(entry) : load<f64>(entry);
    } else {
      next += step;
      value = descending ? -load<f64>(next) : load<f64>(next);
    }
    let limit = unitAfter(done, perEvent, total, middle, tail);
    if (edgeCount > 0) {
      while (ahead <= done) {
        behind = ahead;
        edge++;
        ahead = edgeAt(edges, edgeCount, edge, descending, total);
      }
      limit = min(limit, min((done - behind) * growth, (ahead - done) * decay));
    }
    let last = first;
    let sum: f64 = 0;
    while (true) {
      // The run of values before the next entry, as far as there is room.
      const room = <i32>min(limit - weight, <f64>valueCount);
      let left = room;
      let run: f64 = 0;
      while (left > 0 && value < mean) {
        run += value - first;
        last = value;
        left--;
        next += step;
        value = descending ? -load<f64>(next) : load<f64>(next);
      }
      if (left < room) {
        weight += <f64>(room - left);
        sum += run * SUM_SCALE;
        pure = pure && last === first;
      }
      if (value < mean) {
        if (!(pure && value === first)) break;
        // Equal values stay together, whatever they weigh.
        weight += 1.0;
        next += step;
        value = descending ? -load<f64>(next) : load<f64>(next);
        continue;
      }
      if (entry === entriesEnd) break;
      const signed = load<f64>(entry + toWeight);
      const single = signed > 0.0;
      const w = single ? signed : -signed;
      const same = pure && single && mean === first;
      if (!(weight + w <= limit) && !same) break;
      weight += w;
      sum += (mean - first) * (w * SUM_SCALE);
      pure = same;
      last = mean;
      entry += step;
      mean = descending ? -load<f64>(entry) : load<f64>(entry);
    }
    const centre = centreOf(first, last, sum, weight);
    store<f64>(out, (descending ? -centre : centre) + 0.0);
    store<f64>(out + toOutWeight, pure ? weight : -weight);
    out += step;
    count++;
    done += weight;
  }
  return count;
}

function edgeAt(edges: usize, edgeCount: i32, index: i32, descending: bool, total: f64): f64 {
  if (index >= edgeCount) return Infinity;
  const at = descending ? edgeCount - 1 - index : index;
  const rank = load<f64>(edges + ((<usize>at) << 3));
  return descending ? total - rank : rank;
}
