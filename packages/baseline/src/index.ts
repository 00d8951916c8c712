export {
  type BaselineBlocks,
  type BaselineFeature,
  type BaselineManifest,
  type BaselineSource,
  type FrozenValues,
  manifestOf,
  type SliceRows,
} from "./baseline-manifest.js";
export {
  BASELINE_COMPRESSION,
  type BaselineRequest,
  BLOCK_COMPRESSION,
  type BuiltBaseline,
  buildBaseline,
} from "./build-baseline.js";
export { type BaselineSide, loadBaselineSide, sideOfPart, sideOfSketch } from "./load-baseline-side.js";
export type { OnProgress, ReadProgress } from "./read-progress.js";
