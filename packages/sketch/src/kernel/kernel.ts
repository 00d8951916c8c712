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
  /** What the merging pass wrote, in the order of the pass (descending means when the pass was descending). */
  readonly outMeans: Float64Array;
  readonly outWeights: Float64Array;
  /** Makes room; every array may be a new one afterwards, and its content is lost. */
  reserve(valueCount: number, entryCount: number): void;
  /** Sorts values[0, count) ascending and says whether all are finite; if not, the order is unspecified. */
  sortValues(count: number): boolean;
  /** Sorts the entries [0, count) by mean, stable. */
  sortEntries(count: number): void;
  /** Merges entries and values (each of weight 1) into clusters of at most one unit of k; gives the number of clusters. */
  mergePass(entryCount: number, valueCount: number, scale: PassScale, descending: boolean): number;
}

/** The scale function of one pass: a cluster starting below `q` may weigh total·p / (middle·√p + tail), p = q(1 − q). */
export interface PassScale {
  readonly total: number;
  readonly middle: number;
  readonly tail: number;
}

/** A gap counts as one when it is this many times wider than the spacing of the clusters before it. */
export const GAP_RATIO = 64;

/** How many gaps a pass may keep open; each costs at most three clusters more. */
export const GAP_BUDGET = 8;
