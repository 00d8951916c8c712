import { MoorlineError } from "@moorline/errors";
import type { BaselineRecord } from "@moorline/store";

/** What a baseline says of itself: `BaselineRecord.manifest`. JSON-serialisable. */
export interface BaselineManifest {
  readonly format: typeof MANIFEST_FORMAT;
  /** Version of the program that made it. */
  readonly moorline: string;
  readonly source: BaselineSource;
  readonly rows: number;
  readonly features: readonly BaselineFeature[];
  /** Slices that have parts of their own, `all` first. */
  readonly slices: readonly SliceRows[];
  /** Slices with too few rows, or beyond the slice limit: compared with `all`. */
  readonly leftOutSlices: readonly SliceRows[];
  readonly blocks: BaselineBlocks;
  /** Eleven values a row: the baseline's quantiles at the frozen ranks. */
  readonly thresholds: readonly FrozenValues[];
  /** Values that a hundredth of the finite values or more have, at most 32 a row. */
  readonly atoms: readonly FrozenValues[];
}

export const MANIFEST_FORMAT = 1;

export type BaselineSource =
  | {
      readonly kind: "files";
      /** As the caller named them. */
      readonly name: string;
      readonly files: number;
      readonly fileFormat: string;
      /** Of the files' bytes, one file after the other. */
      readonly sha256: string;
    }
  | { readonly kind: "windows"; readonly fromMs: number; readonly toMs: number; readonly panes: number };

export interface BaselineFeature {
  readonly name: string;
  readonly unit: string | null;
  /** The column that it was read from. */
  readonly column: string;
  readonly events: number;
  readonly finite: number;
  readonly missing: number;
  readonly nonFinite: number;
  readonly min: number | null;
  readonly max: number | null;
}

export interface SliceRows {
  readonly slice: string;
  readonly rows: number;
}

export interface BaselineBlocks {
  readonly by: "time" | "rows" | "none";
  readonly count: number;
  /** Length of a block by time. */
  readonly lengthMs: number | null;
  /** Rows of a block by rows. */
  readonly rowsEach: number | null;
  /** How the blocks came to be, in words. */
  readonly sentence: string;
}

export interface FrozenValues {
  readonly slice: string;
  readonly feature: string;
  readonly values: readonly number[];
}

/** @throws MOORLINE_FORMAT_BASELINE_MANIFEST when another version wrote it */
export function manifestOf(record: BaselineRecord): BaselineManifest {
  const manifest = record.manifest as BaselineManifest | null;
  if (manifest?.format === MANIFEST_FORMAT) return manifest;
  const format = String(manifest?.format);
  throw new MoorlineError("MOORLINE_FORMAT_BASELINE_MANIFEST", { id: record.id, format });
}
