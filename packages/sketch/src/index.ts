export type { Atom } from "./atom-table.js";
export { DEFAULT_CATEGORY_LIMIT, MOST_CATEGORIES } from "./categories/category-limits.js";
export { categoryName } from "./categories/category-name.js";
export {
  CategorySketch,
  type CategorySketchCounts,
  type CategorySketchOptions,
} from "./categories/category-sketch.js";
export type { CdfKnots } from "./cdf-knots.js";
export { DEFAULT_COMPRESSION, LEAST_COMPRESSION, MOST_COMPRESSION } from "./compression.js";
export type { KindCounts } from "./kind-counts.js";
export { NumericSketch, type SketchOptions } from "./numeric-sketch.js";
export type { ThresholdCounts, ThresholdSet } from "./threshold-counter.js";
