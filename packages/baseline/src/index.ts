export {
  type BaselineBlocks,
  type BaselineFeature,
  type BaselineManifest,
  type BaselineSource,
  type FrozenValues,
  manifestOf,
  type SliceRows,
} from "./baseline-manifest.js";
export { BLOCK_COUNTS, WHOLE } from "./baseline-parts.js";
export { decodeBlockCounts, encodeBlockCounts } from "./block-counts-codec.js";
export { blockLengthMs } from "./block-plan.js";
export {
  BASELINE_COMPRESSION,
  type BaselineRequest,
  type BuiltBaseline,
  buildBaseline,
} from "./build-baseline.js";
export { buildWindowBaseline, type WindowBaselineRequest } from "./build-window-baseline.js";
export { type ComparedColumns, FileSides } from "./file-sides.js";
export type { ColumnKind, FileColumn } from "./files/file-columns.js";
export { findBaseline } from "./find-baseline.js";
export { type Dependence, HeldFeature } from "./held-feature.js";
export { findHeldFeature, type HeldSlice, loadHeldFeature } from "./load-held-feature.js";
export { sideOfPart, sideOfSketch } from "./part-side.js";
export type { OnProgress, ReadProgress } from "./read-progress.js";
export { LEAST_SLICE_ROWS } from "./slice-plan.js";
export { streamRule } from "./stream-rule.js";
