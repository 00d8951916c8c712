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
export { buildWindowBaseline, type WindowBaselineRequest } from "./build-window-baseline.js";
export { FileSides } from "./file-sides.js";
export type { ColumnKind, FileColumn } from "./files/file-columns.js";
export { findBaseline } from "./find-baseline.js";
export { type BaselineSide, loadBaselineSide, sideOfPart, sideOfSketch } from "./load-baseline-side.js";
export type { OnProgress, ReadProgress } from "./read-progress.js";
export { LEAST_SLICE_ROWS } from "./slice-plan.js";
