export {
  type CoverInput,
  type CoverRun,
  coverRange,
  DAY_MS,
  HOUR_MS,
  hasLongRollups,
} from "./cover-range.js";
export {
  mergeRollups,
  type RangeQuery,
  type RangeSketch,
  type RollupReader,
  readRange,
} from "./read-range.js";
export { paneStart, wholePanes, windowAround } from "./window-bounds.js";
