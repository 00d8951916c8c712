import { GAP_BUDGET, GAP_RATIO, type Kernel, type PassScale } from "./kernel.js";

type Arrays = Pick<Kernel, "values" | "means" | "weights" | "outMeans" | "outWeights">;

/**
 * One fused merging pass: entries (ascending means) and sorted values of weight 1 become clusters of at most one unit of k.
 *
 * Direction   ascending or mirrored; values are negated on the way in and out, so that both run the same code. The caller
 *             alternates, for one direction alone drifts by several times the error on a stream that is not stationary.
 * Mean        sum of distances from the cluster's first value; clamped into the cluster, so that means stay ascending. Where
 *             that sum overflows (values near ±MAX_VALUE), the middle of the cluster is taken.
 * Purity      a cluster of equal values stays pure (weight > 0, drawn as a step); a mixed one gets a negative weight.
 * Gaps        no cluster reaches over a gap much wider than the spacing before it, and the single values at both edges of the
 *             gap stay alone, so that the CDF is flat between two far modes. A pass has a budget for this.
 *
 * The WebAssembly twin (assembly/index.ts) does the same operations in the same order: change both or neither.
 */
export function mergePass(
  arrays: Arrays,
  entryCount: number,
  valueCount: number,
  scale: PassScale,
  descending: boolean,
): number {
  const { values, means, weights, outMeans, outWeights } = arrays;
  const sign = descending ? -1 : 1;
  let entry = descending ? entryCount - 1 : 0;
  let next = descending ? valueCount - 1 : 0;
  let entriesLeft = entryCount;
  let valuesLeft = valueCount;
  let count = 0; // clusters written
  let done = 0; // weight of the clusters written
  let first = 0;
  let last = 0;
  let lastWeight = 0;
  let weight = 0; // of the open cluster; 0 = none is open
  let sum = 0;
  let pure = true;
  let limit = 0;
  let previousMean = 0;
  let spacing = -1; // of cluster means; -1 = no cluster yet, at the start and after a gap
  let gapLimit = Number.POSITIVE_INFINITY;
  let gapsLeft = GAP_BUDGET;

  while (entriesLeft + valuesLeft > 0) {
    let x: number;
    let w: number;
    let single: boolean;
    const mean = entriesLeft > 0 ? sign * means[entry]! : 0;
    const value = valuesLeft > 0 ? sign * values[next]! : 0;
    if (valuesLeft === 0 || (entriesLeft > 0 && mean <= value)) {
      x = mean;
      w = weights[entry]!;
      single = w > 0;
      if (!single) w = -w;
      entry += sign;
      entriesLeft--;
    } else {
      x = value;
      w = 1;
      single = true;
      next += sign;
      valuesLeft--;
    }
    const gap = weight > 0 && x - last > gapLimit;
    if (weight > 0 && !gap && (weight + w <= limit || (pure && single && x === first))) {
      weight += w;
      sum += (x - first) * w;
      pure = pure && single && x === first;
      last = x;
      lastWeight = w;
      continue;
    }
    if (weight > 0) {
      // At the edge of a gap the last single value stays alone.
      const guard = gap && lastWeight === 1 && weight > 1 && last > first;
      if (guard) {
        weight -= 1;
        sum -= last - first;
      }
      let centre = first + sum / weight;
      if (!(centre < Number.POSITIVE_INFINITY)) centre = first * 0.5 + last * 0.5;
      if (centre > last) centre = last;
      outMeans[count] = sign * centre;
      outWeights[count] = pure || weight === 1 ? weight : -weight;
      count++;
      done += weight;
      if (guard) {
        outMeans[count] = sign * last;
        outWeights[count] = 1;
        count++;
        done += 1;
      }
      if (gap) {
        gapsLeft--;
        spacing = -1;
        gapLimit = Number.POSITIVE_INFINITY;
      } else if (spacing < 0) {
        spacing = 0;
      } else {
        const step = centre - previousMean;
        spacing = Math.max(step, spacing * 0.5);
        gapLimit = gapsLeft > 0 && spacing > 0 ? spacing * GAP_RATIO : Number.POSITIVE_INFINITY;
      }
      previousMean = guard ? last : centre;
    }
    first = x;
    last = x;
    lastWeight = w;
    weight = w;
    sum = 0;
    pure = single;
    limit = gap && w === 1 ? 0 : clusterLimit(done, scale);
  }
  if (weight > 0) {
    let centre = first + sum / weight;
    if (!(centre < Number.POSITIVE_INFINITY)) centre = first * 0.5 + last * 0.5;
    if (centre > last) centre = last;
    outMeans[count] = sign * centre;
    outWeights[count] = pure ? weight : -weight;
    count++;
  }
  return count;
}

/** The greatest weight of a cluster that starts after `done`: one unit of k by the midpoint rule. */
function clusterLimit(done: number, scale: PassScale): number {
  const { total, middle, tail } = scale;
  const q = done / total;
  const p = q * (1 - q);
  const half = (0.5 * p) / (middle * Math.sqrt(p) + tail);
  const r = q + half;
  const s = r * (1 - r);
  return s > 0 ? (total * s) / (middle * Math.sqrt(s) + tail) : 0;
}
