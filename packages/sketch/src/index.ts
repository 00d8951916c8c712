export type { Atom } from "./atom-table.js";
export type { CdfKnots } from "./cdf-knots.js";
export { DEFAULT_COMPRESSION, LEAST_COMPRESSION, MOST_COMPRESSION } from "./compression.js";
export type { KindCounts } from "./kind-counts.js";
export { NumericSketch, type SketchOptions } from "./numeric-sketch.js";
export type { ThresholdCounts, ThresholdSet } from "./threshold-counter.js";
