import type { PassPlan, PassScale } from "./kernel/kernel.js";

/** Share of k1 (fine in the middle, for KS) in the mix; the rest is k2 (fine in the tails). */
export const MIDDLE_SHARE = 0.55;

/**
 * The scale function: a mix of k1 and k2 of Dunning & Ertl (2019, arXiv:1902.04023), by its derivative
 *
 *   k'(q) = δ · ( share/π / √(q(1−q))  +  (1−share)/(2 ln N) / (q(1−q)) )
 *
 * A cluster holds at most one unit of k. k1 alone leaves the tails coarse, k2 alone the middle; see docs/accuracy.md.
 */
export function mixScale(compression: number, total: number): PassScale {
  const logTotal = Math.log(Math.max(total, Math.E));
  return {
    total,
    middle: (compression * MIDDLE_SHARE) / Math.PI,
    tail: (compression * (1 - MIDDLE_SHARE)) / (2 * logTotal),
  };
}

/** Share of all events that one unit of k covers at this rank. */
export function unitShare(scale: PassScale, rank: number): number {
  const p = rank * (1 - rank);
  return p > 0 ? p / (scale.middle * Math.sqrt(p) + scale.tail) : 0;
}

/**
 * The plan of one pass. Beside an edge inside the distribution a cluster holds one unit of k2 alone, as a share of the events
 * between its start and the edge behind it (growth) or ahead of it (decay); of the working compression even when the pass is a
 * seal, for those clusters are few and the shape there is steep.
 */
export function passPlan(
  compression: number,
  workingCompression: number,
  total: number,
  edges: readonly number[],
  descending: boolean,
): PassPlan {
  const { middle, tail } = mixScale(compression, total);
  if (edges.length === 0) return { total, middle, tail, descending, edges, growth: 0, decay: 0 };
  const width = 1 / mixScale(workingCompression, total).tail;
  return { total, middle, tail, descending, edges, growth: Math.exp(width) - 1, decay: 1 - Math.exp(-width) };
}
