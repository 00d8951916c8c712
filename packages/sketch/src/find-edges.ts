import type { Kernel } from "./kernel/kernel.js";
import { lowerBound, upperBound } from "./threshold-counter.js";

/** How many edges a pass respects; each costs some twenty clusters. */
export const MOST_EDGES = 4;

/** A gap is an edge when it is this many times wider than the stretch of REACH entries on either side of it. */
const EDGE_RATIO = 16;

/**
 * On how many entries the scale beside a gap is read. In a sample of any smooth density a gap is wider than 16 times the four
 * spacings beside it with a probability of about 17^−4, and on both sides with its square: chance makes no edges.
 */
const REACH = 4;

/** Of a gap that new values fall into, the widest part stays an edge when it is at least this share of it. */
const LEAST_PART = 0.5;

interface Gap {
  readonly after: number;
  readonly ratio: number;
}

/**
 * Ranks, in events, of the widest gaps in the distribution of the kernel's entries and sorted values: between far modes there is
 * nothing, and a cluster that reached over would stand in it. Relative to the scale beside them, at most MOST_EDGES, ascending.
 */
export function findEdges(kernel: Kernel, entryCount: number, valueCount: number): readonly number[] {
  if (kernel.findGap(0, entryCount, REACH, EDGE_RATIO) < 0) return NO_EDGES;
  const { means, weights, values } = kernel;
  const edges: number[] = [];
  let entryRank = 0;
  let entry = 0;
  for (const { after } of widestGaps(kernel, entryCount)) {
    for (; entry <= after; entry++) entryRank += Math.abs(weights[entry]!);
    const below = valuesBelowGap(means[after]!, means[after + 1]!, values, valueCount);
    if (below !== null) edges.push(entryRank + below);
  }
  return edges;
}

const NO_EDGES: readonly number[] = [];

/** The gaps of the greatest ratios, in the order of the entries. */
function widestGaps(kernel: Kernel, entryCount: number): Gap[] {
  const { means } = kernel;
  const gaps: Gap[] = [];
  for (let from = 0; ; ) {
    const after = kernel.findGap(from, entryCount, REACH, EDGE_RATIO);
    if (after < 0) break;
    const low = means[after]!;
    const high = means[after + 1]!;
    const scale = Math.max(low - means[after - REACH]!, means[after + 1 + REACH]! - high);
    gaps.push({
      after,
      ratio: scale > 0 ? Math.min(Number.MAX_VALUE, (high - low) / scale) : Number.MAX_VALUE,
    });
    from = after + 1;
  }
  if (gaps.length <= MOST_EDGES) return gaps;
  gaps.sort((a, b) => b.ratio - a.ratio || a.after - b.after);
  return gaps.slice(0, MOST_EDGES).sort((a, b) => a.after - b.after);
}

/** How many values lie below what is left of a gap, or null when nothing wide is left of it. */
function valuesBelowGap(low: number, high: number, values: Float64Array, valueCount: number): number | null {
  const from = upperBound(values, 0, valueCount, low);
  const to = lowerBound(values, from, valueCount, high);
  let widest = 0;
  let below = from;
  let left = low;
  for (let i = from; i <= to; i++) {
    const right = i < to ? values[i]! : high;
    if (right - left > widest) {
      widest = right - left;
      below = i;
    }
    left = right;
  }
  return widest >= LEAST_PART * (high - low) ? below : null;
}
