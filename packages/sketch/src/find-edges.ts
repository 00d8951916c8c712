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

interface Entries {
  readonly means: Float64Array;
  readonly weights: Float64Array;
  readonly size: number;
}

interface Gap {
  readonly after: number;
  readonly ratio: number;
}

/**
 * Ranks, in events, of the widest gaps in the distribution of entries and sorted values: between far modes there is nothing,
 * and a cluster that reached over would stand in it. Relative to the scale beside them, at most MOST_EDGES, ascending.
 */
export function findEdges(entries: Entries, values: Float64Array, valueCount: number): number[] {
  const gaps = findGaps(entries);
  if (gaps.length === 0) return [];
  if (gaps.length > MOST_EDGES) {
    gaps.sort((a, b) => b.ratio - a.ratio || a.after - b.after);
    gaps.length = MOST_EDGES;
    gaps.sort((a, b) => a.after - b.after);
  }
  const edges: number[] = [];
  let entryRank = 0;
  let entry = 0;
  for (const { after } of gaps) {
    for (; entry <= after; entry++) entryRank += Math.abs(entries.weights[entry]!);
    const below = valuesBelowGap(entries.means[after]!, entries.means[after + 1]!, values, valueCount);
    if (below !== null) edges.push(entryRank + below);
  }
  return edges;
}

function findGaps({ means, size }: Entries): Gap[] {
  const gaps: Gap[] = [];
  for (let i = REACH; i + REACH + 1 < size; i++) {
    const gap = means[i + 1]! - means[i]!;
    const before = means[i]! - means[i - REACH]!;
    if (!(gap > EDGE_RATIO * before)) continue;
    const beyond = means[i + 1 + REACH]! - means[i + 1]!;
    const scale = Math.max(before, beyond);
    if (gap > EDGE_RATIO * scale) gaps.push({ after: i, ratio: scale > 0 ? gap / scale : Number.MAX_VALUE });
  }
  return gaps;
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
