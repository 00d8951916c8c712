export { type CategoryComparison, compareCategoryFeature } from "./category-comparison.js";
export type { CompanionStatistics } from "./companion-statistics.js";
export { compareFeature, type FeatureComparison } from "./feature-comparison.js";
export { type FeatureOnset, type OnsetRequest, readOnset } from "./read-onset.js";
export { type PairsAnswer, type PairsRequest, readPairs, type TimeRange } from "./read-pairs.js";
export {
  type FeatureSensitivity,
  readSensitivity,
  type SensitivityAnswer,
  type SensitivityRequest,
} from "./read-sensitivity.js";
export { type FeatureSlices, readSlices, type SlicesRequest } from "./read-slices.js";
export { type RehearsalAnswer, type RehearsalRequest, type RehearsedPage, rehearse } from "./rehearse.js";
