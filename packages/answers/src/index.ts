export { type CategoryComparison, compareCategoryFeature } from "./category-comparison.js";
export type { CompanionStatistics } from "./companion-statistics.js";
export { compareFeature, type FeatureComparison } from "./feature-comparison.js";
export { type PairsAnswer, type PairsRequest, readPairs, type TimeRange } from "./read-pairs.js";
