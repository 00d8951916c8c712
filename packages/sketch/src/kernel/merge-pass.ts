import { type Kernel, type PassPlan, SUM_SCALE, SUM_UNSCALE } from "./kernel.js";

type Arrays = Pick<Kernel, "values" | "means" | "weights" | "outMeans" | "outWeights">;

/**
 * One fused merging pass: entries (ascending means) and sorted values of weight 1 become clusters of at most one unit of k.
 *
 * Direction   ascending or mirrored; values are negated on the way in and out, so that both run the same code. The caller
 *             alternates, for one direction alone drifts by several times the error on a stream that is not stationary.
 * Mean        by the sum of distances from the cluster's first value, and never outside the cluster, so that means ascend;
 *             where a cluster is wider than MAX_VALUE, its middle.
 * Purity      a cluster of equal values stays pure (weight > 0, drawn as a step); a mixed one gets a negative weight.
 *
 * The WebAssembly twin (assembly/merge-pass.ts) does the same operations in the same order: change both or neither.
 */
export function mergePass(arrays: Arrays, entryCount: number, valueCount: number, plan: PassPlan): number {
  const { values, means, weights, outMeans, outWeights } = arrays;
  const step = plan.descending ? -1 : 1;
  const limits = new ClusterLimits(plan);
  let entry = plan.descending ? entryCount - 1 : 0;
  let next = plan.descending ? valueCount - 1 : 0;
  let entriesLeft = entryCount;
  let valuesLeft = valueCount;
  const outStart = plan.descending ? entryCount + valueCount - 1 : 0;
  let out = outStart;
  let done = 0; // weight of the clusters written
  let first = 0;
  let last = 0;
  let weight = 0; // of the open cluster; 0 = none is open
  let sum = 0; // of weighted distances from the first value, times SUM_SCALE
  let run = 0; // the same of the values since the last entry, not yet scaled and in the sum
  let pure = true;
  let limit = 0;
  while (entriesLeft + valuesLeft > 0) {
    const mean = entriesLeft > 0 ? step * means[entry]! : Number.POSITIVE_INFINITY;
    const value = valuesLeft > 0 ? step * values[next]! : Number.POSITIVE_INFINITY;
    const isValue = value < mean;
    let x = value;
    let w = 1;
    if (!isValue) {
      x = mean;
      w = weights[entry]!;
      entry += step;
      entriesLeft--;
    } else {
      next += step;
      valuesLeft--;
    }
    const single = w > 0;
    if (!single) w = -w;
    const same: boolean = pure && single && x === first;
    if (weight + w <= limit || (same && weight > 0)) {
      weight += w;
      if (isValue) run += x - first;
      else {
        sum += run * SUM_SCALE;
        run = 0;
        sum += (x - first) * (w * SUM_SCALE);
      }
      pure = same;
      last = x;
      continue;
    }
    if (weight > 0) {
      outMeans[out] = step * centreOf(first, last, sum + run * SUM_SCALE, weight) + 0;
      outWeights[out] = pure ? weight : -weight;
      out += step;
      done += weight;
    }
    first = x;
    last = x;
    weight = w;
    sum = 0;
    run = 0;
    pure = single;
    limit = limits.after(done);
  }
  if (weight > 0) {
    outMeans[out] = step * centreOf(first, last, sum + run * SUM_SCALE, weight) + 0;
    outWeights[out] = pure ? weight : -weight;
    out += step;
  }
  return Math.abs(out - outStart);
}

function centreOf(first: number, last: number, sum: number, weight: number): number {
  const centre = first + (sum / weight) * SUM_UNSCALE;
  if (!(centre < Number.POSITIVE_INFINITY)) return first * 0.5 + last * 0.5;
  return Math.min(centre, last);
}

/** How much a cluster may weigh by where it starts; asked with `done` ascending. */
class ClusterLimits {
  readonly #plan: PassPlan;
  #edge = 0;
  #behind = Number.NEGATIVE_INFINITY;
  #ahead: number;

  constructor(plan: PassPlan) {
    this.#plan = plan;
    this.#ahead = this.#edgeAt(0);
  }

  after(done: number): number {
    while (this.#ahead <= done) {
      this.#behind = this.#ahead;
      this.#edge++;
      this.#ahead = this.#edgeAt(this.#edge);
    }
    const unit = unitAfter(done, this.#plan);
    if (this.#plan.edges.length === 0) return unit;
    const { growth, decay } = this.#plan;
    return Math.min(unit, (done - this.#behind) * growth, (this.#ahead - done) * decay);
  }

  #edgeAt(index: number): number {
    const { edges, descending, total } = this.#plan;
    if (index >= edges.length) return Number.POSITIVE_INFINITY;
    return descending ? total - edges[edges.length - 1 - index]! : edges[index]!;
  }
}

/** One unit of k for a cluster that starts after `done`: the unit at the start and half of its change over its own width. */
function unitAfter(done: number, plan: PassPlan): number {
  const q = done * (1 / plan.total);
  const p = q * (1 - q);
  if (!(p > 0)) return 0;
  const bend = plan.middle * Math.sqrt(p);
  const inverse = 1 / (bend + plan.tail);
  const unit = p * inverse;
  const slope = (0.5 * bend + plan.tail) * (inverse * inverse) * (1 - 2 * q);
  return plan.total * (unit * (1 + 0.5 * slope));
}
