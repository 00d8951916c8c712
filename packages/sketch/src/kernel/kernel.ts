/**
 * The arithmetic that every value goes through: sorting and the merging pass. There are two of them, WebAssembly and plain
 * TypeScript, which give the same bytes. A kernel owns its scratch arrays; nothing in them outlives one call of the sketch.
 */
export interface Kernel {
  readonly name: "wasm" | "typescript";
  /** Values on their way in. */
  readonly values: Float64Array;
  /** Entries on their way into the merging pass: ascending means; weight > 0 is pure (one value), < 0 mixed. */
  readonly means: Float64Array;
  readonly weights: Float64Array;
  /** What the merging pass wrote, ascending: from 0 on, or up to entryCount + valueCount when the pass was descending. */
  readonly outMeans: Float64Array;
  readonly outWeights: Float64Array;
  /** Makes room; every array may be a new one afterwards, and its content is lost. */
  reserve(valueCount: number, entryCount: number): void;
  /** Sorts values[0, count) ascending, −0 as 0, and says whether all are finite; if not, the order is unspecified. */
  sortValues(count: number): boolean;
  /** The first i of from, from + stride, … below count with values[i] = values[i − stride]; −1 when there is none. */
  findRepeat(from: number, count: number, stride: number): number;
  /** The first i ≥ from so that means[i + 1] − means[i] is more than ratio times the `reach` steps before it and after it, or −1. */
  findGap(from: number, entryCount: number, reach: number, ratio: number): number;
  /** The sum of values[0, count), in four lanes. */
  sumValues(count: number): number;
  /** Sorts the entries [0, count) by mean, stable. */
  sortEntries(count: number): void;
  /** Merges entries and sorted values (of weight 1 each) into clusters of at most one unit of k; gives their number. */
  mergePass(entryCount: number, valueCount: number, plan: PassPlan): number;
}

/** The scale function: one unit of k at rank q is the share p / (middle·√p + tail) of all, with p = q(1 − q). */
export interface PassScale {
  readonly total: number;
  readonly middle: number;
  readonly tail: number;
}

export interface PassPlan extends PassScale {
  readonly descending: boolean;
  /** Ranks (in events, ascending) of wide gaps: the clusters beside them are as fine as at the ends of the distribution. */
  readonly edges: readonly number[];
  /** Of the events between a cluster and the edge behind it, the share that the cluster may hold; and of those ahead. */
  readonly growth: number;
  readonly decay: number;
}

/** Sums of distances are kept this much smaller, so that they overflow only for clusters wider than MAX_VALUE. */
export const SUM_SCALE = 2 ** -40;
export const SUM_UNSCALE = 2 ** 40;
