import type { StreamConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { NumericSketch, SketchOptions } from "@moorline/sketch";
import type { BaselinePart, BaselineRecord } from "@moorline/store";
import {
  type BaselineManifest,
  type BaselineSource,
  type FrozenValues,
  MANIFEST_FORMAT,
} from "./baseline-manifest.js";
import { bindColumns } from "./bind-columns.js";
import { type BlockPlan, planBlocks } from "./block-plan.js";
import { contentId } from "./content-id.js";
import { DuckdbSession } from "./files/duckdb-session.js";
import { hashFiles, RowTable } from "./files/row-table.js";
import { findTrainingFiles } from "./files/training-files.js";
import { atomValues, thresholdValues } from "./freeze-values.js";
import { MOORLINE_VERSION } from "./moorline-version.js";
import { OWN_THRESHOLDS } from "./own-thresholds.js";
import type { OnProgress, ReadProgress } from "./read-progress.js";
import { SketchGrid } from "./sketch-grid.js";
import { planSlices, type SlicePlan } from "./slice-plan.js";

/** Compression of the whole: some 310 clusters, so that the baseline adds little to the error of a comparison. */
export const BASELINE_COMPRESSION = 500;
/** Compression of a block: exact up to 400 values, and small, for there are many. */
export const BLOCK_COMPRESSION = 100;

export interface BaselineRequest {
  readonly stream: StreamConfig;
  /** Path or pattern of CSV, TSV, Parquet or NDJSON files. */
  readonly from: string;
  /** Column that orders the rows in time. Default: the stream's event time, where the files have it. */
  readonly timeColumn?: string;
  readonly createdBy: string;
  readonly createdAtMs: number;
  readonly note?: string;
  readonly onProgress?: OnProgress;
}

export interface BuiltBaseline {
  readonly record: BaselineRecord;
  readonly parts: readonly BaselinePart[];
}

/**
 * A baseline from training files, in bounded memory: rows go to a temporary table, then through sketches twice; the first pass
 * freezes thresholds and atoms, the second counts at them, exactly, for the whole and for each block.
 *
 * @throws MOORLINE_INPUT_FILE… when files or columns cannot be used, MOORLINE_INPUT_BASELINE_EMPTY when a feature has no value
 */
export async function buildBaseline(request: BaselineRequest): Promise<BuiltBaseline> {
  const session = await DuckdbSession.open();
  try {
    const files = await findTrainingFiles(session, request.from);
    const columns = await bindColumns(session, files, request.stream, request.timeColumn);
    const table = await RowTable.load(session, files, columns, request.onProgress);
    const source: BaselineSource = {
      kind: "files",
      name: files.source,
      files: files.paths.length,
      fileFormat: files.format,
      sha256: await hashFiles(files),
    };
    return await sketchRows(table, source, request);
  } finally {
    await session.close();
  }
}

async function sketchRows(
  table: RowTable,
  source: BaselineSource,
  request: BaselineRequest,
): Promise<BuiltBaseline> {
  const { stream } = request;
  const slices = await planSlices(table, stream.sliceLimit);
  const plan = await planBlocks(table, slices.kept.length * stream.features.length);
  const frozen = await freeze(table, slices, plan, request);
  const parts: BaselinePart[] = [];
  const whole = await count(table, slices, plan, frozen, request, (part) => parts.push(part));
  const rowsOf = (lists: readonly (readonly (readonly number[])[])[]): FrozenValues[] =>
    slices.kept.flatMap(({ slice }, s) =>
      stream.features.map(({ name }, f) => ({ slice, feature: name, values: lists[s]![f]! })),
    );
  const manifest: BaselineManifest = {
    format: MANIFEST_FORMAT,
    moorline: MOORLINE_VERSION,
    source,
    rows: table.rows,
    features: stream.features.map(({ name, unit }, f) => {
      const sketch = whole.sketches[0]![f]!;
      const { events, finite, missing } = sketch.counts;
      const nonFinite = events - finite - missing;
      const column = table.columns.features[f]!.column.path.join(".");
      return { name, unit, column, events, finite, missing, nonFinite, min: sketch.min, max: sketch.max };
    }),
    slices: slices.kept,
    leftOutSlices: slices.leftOut,
    blocks: plan.blocks,
    thresholds: rowsOf(frozen.thresholds).filter(({ values }) => values.length > 0),
    atoms: rowsOf(frozen.atoms).filter(({ values }) => values.length > 0),
  };
  parts.unshift(...partsOf(whole, slices, request, WHOLE));
  return { record: recordOf(request, manifest, parts), parts };
}

export function recordOf(
  request: Pick<BaselineRequest, "stream" | "createdBy" | "createdAtMs" | "note">,
  manifest: BaselineManifest,
  parts: readonly BaselinePart[],
): BaselineRecord {
  return {
    id: contentId(request.stream.name, manifest, parts),
    stream: request.stream.name,
    createdAtMs: request.createdAtMs,
    createdBy: request.createdBy,
    note: request.note ?? "",
    manifest,
  };
}

/** `BaselinePart.block` of the whole. */
const WHOLE = -1;

interface Frozen {
  readonly thresholds: readonly (readonly (readonly number[])[])[];
  readonly atoms: readonly (readonly (readonly number[])[])[];
}

async function freeze(
  table: RowTable,
  slices: SlicePlan,
  plan: BlockPlan,
  request: BaselineRequest,
): Promise<Frozen> {
  const { stream } = request;
  const grid = new SketchGrid(stream.features.length, slices, () => ({ compression: BASELINE_COMPRESSION }));
  const report = reporter(table, "freezing thresholds", request);
  for await (const batch of table.batches(plan.orderBy)) {
    grid.take(batch);
    report(batch.rows);
  }
  const empty = stream.features.filter((_, f) => grid.sketches[0]![f]!.counts.finite === 0);
  if (empty.length > 0) {
    const features = empty.map(({ name }) => name);
    throw new MoorlineError("MOORLINE_INPUT_BASELINE_EMPTY", { source: request.from, features });
  }
  const each = <T>(of: (sketch: NumericSketch) => T): T[][] => grid.sketches.map((row) => row.map(of));
  return { thresholds: each(thresholdValues), atoms: each(atomValues) };
}

async function count(
  table: RowTable,
  slices: SlicePlan,
  plan: BlockPlan,
  frozen: Frozen,
  request: BaselineRequest,
  keep: (part: BaselinePart) => void,
): Promise<SketchGrid> {
  const gridOf = (compression: number): SketchGrid =>
    new SketchGrid(request.stream.features.length, slices, (s, f): SketchOptions => {
      const values = frozen.thresholds[s]![f]!;
      const knownAtoms = frozen.atoms[s]![f]!;
      return {
        compression,
        knownAtoms,
        ...(values.length > 0 && { thresholds: { id: OWN_THRESHOLDS, values } }),
      };
    });
  const whole = gridOf(BASELINE_COMPRESSION);
  const report = reporter(table, "counting", request);
  let block = { index: NO_BLOCK, grid: whole };
  const closeBlock = () => {
    if (block.index >= 0) for (const part of partsOf(block.grid, slices, request, block.index)) keep(part);
  };
  let row = 0;
  for await (const batch of table.batches(plan.orderBy)) {
    whole.take(batch);
    for (const { index, from, to } of runsOf(batch.rows, (i) =>
      plan.blockOf(row + i, batch.timesMs[i] ?? null),
    )) {
      if (index !== block.index) {
        closeBlock();
        block = { index, grid: index >= 0 ? gridOf(BLOCK_COMPRESSION) : whole };
      }
      if (index >= 0) block.grid.take(batch, from, to);
    }
    row += batch.rows;
    report(batch.rows);
  }
  closeBlock();
  return whole;
}

const NO_BLOCK = -1;

/** Stretches of rows that belong to one block. */
function* runsOf(
  rows: number,
  blockOf: (row: number) => number,
): Generator<{ readonly index: number; readonly from: number; readonly to: number }> {
  let from = 0;
  while (from < rows) {
    const index = blockOf(from);
    let to = from + 1;
    while (to < rows && blockOf(to) === index) to++;
    yield { index, from, to };
    from = to;
  }
}

/** Encoded parts by slice and feature. A block's slice without a row has none. */
function partsOf(
  grid: SketchGrid,
  slices: SlicePlan,
  request: BaselineRequest,
  block: number,
): BaselinePart[] {
  return slices.kept.flatMap(({ slice }, s) =>
    request.stream.features.flatMap(({ name }, f) => {
      const sketch = grid.sketches[s]![f]!;
      if (sketch.counts.events === 0) return [];
      return [{ slice, feature: name, block, body: sketch.encode() }];
    }),
  );
}

function reporter(
  table: RowTable,
  stage: ReadProgress["stage"],
  { onProgress }: BaselineRequest,
): (rows: number) => void {
  let seen = 0;
  return (rows) => {
    seen += rows;
    onProgress?.({ stage, rows: seen, totalRows: table.rows, done: seen / table.rows });
  };
}
