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
import { BLOCK_COUNTS, WHOLE } from "./baseline-parts.js";
import { bindColumns } from "./bind-columns.js";
import { BlockCounter } from "./block-counter.js";
import { encodeBlockCounts } from "./block-counts-codec.js";
import { type BlockPlan, planBlocks } from "./block-plan.js";
import { contentId } from "./content-id.js";
import { DuckdbSession } from "./files/duckdb-session.js";
import { hashFiles, type RowBatch, RowTable } from "./files/row-table.js";
import { findTrainingFiles } from "./files/training-files.js";
import { atomValues, thresholdValues } from "./freeze-values.js";
import { MOORLINE_VERSION } from "./moorline-version.js";
import { OWN_THRESHOLDS } from "./own-thresholds.js";
import type { OnProgress, ReadProgress } from "./read-progress.js";
import { SketchGrid } from "./sketch-grid.js";
import { membersOf, planSlices, type SlicePlan } from "./slice-plan.js";

/** Compression of the whole: some 310 clusters, so that the baseline adds little to the error of a comparison. */
export const BASELINE_COMPRESSION = 500;

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
  const series = slices.kept.length * stream.features.length;
  const plan = await planBlocks(table, series, stream.horizons[0]!.ms);
  const frozen = await freeze(table, slices, plan, request);
  const { whole, blocks } = await count(table, slices, plan, frozen, request);
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
  const parts = [...partsOf(whole, slices, request), ...blockParts(blocks, plan, slices, request)];
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

interface Counted {
  readonly whole: SketchGrid;
  /** By slice, then feature; empty without blocks. */
  readonly blocks: readonly (readonly BlockCounter[])[];
}

async function count(
  table: RowTable,
  slices: SlicePlan,
  plan: BlockPlan,
  frozen: Frozen,
  request: BaselineRequest,
): Promise<Counted> {
  const features = request.stream.features.length;
  const whole = new SketchGrid(features, slices, (s, f): SketchOptions => {
    const values = frozen.thresholds[s]![f]!;
    const knownAtoms = frozen.atoms[s]![f]!;
    const thresholds = values.length > 0 && { thresholds: { id: OWN_THRESHOLDS, values } };
    return { compression: BASELINE_COMPRESSION, knownAtoms, ...thresholds };
  });
  const counters = plan.blocks.count === 0 ? [] : frozen.thresholds;
  const blocks = counters.map((row) => row.map((values) => new BlockCounter(plan.blocks.count, values)));
  const report = reporter(table, "counting", request);
  let first = 0;
  for await (const batch of table.batches(plan.orderBy)) {
    whole.take(batch);
    if (blocks.length > 0) countBlocks(batch, first, plan, slices, blocks);
    first += batch.rows;
    report(batch.rows);
  }
  return { whole, blocks };
}

function countBlocks(
  batch: RowBatch,
  first: number,
  plan: BlockPlan,
  slices: SlicePlan,
  blocks: Counted["blocks"],
): void {
  const blockOf = Int32Array.from({ length: batch.rows }, (_, row) =>
    plan.blockOf(first + row, batch.timesMs[row] ?? null),
  );
  for (const [slice, rows] of membersOf(slices, batch).entries()) {
    for (const [feature, values] of batch.features.entries()) {
      const counter = blocks[slice]![feature]!;
      for (const row of rows) if (blockOf[row]! >= 0) counter.add(blockOf[row]!, values[row]!);
    }
  }
}

/** Encoded sketches by slice and feature. */
function partsOf(grid: SketchGrid, slices: SlicePlan, { stream }: BaselineRequest): BaselinePart[] {
  return slices.kept.flatMap(({ slice }, s) =>
    stream.features.map(({ name }, f) => ({
      slice,
      feature: name,
      block: WHOLE,
      body: grid.sketches[s]![f]!.encode(),
    })),
  );
}

function blockParts(
  blocks: Counted["blocks"],
  plan: BlockPlan,
  slices: SlicePlan,
  { stream }: BaselineRequest,
): BaselinePart[] {
  return blocks.flatMap((row, s) =>
    row.map((counter, f) => ({
      slice: slices.kept[s]!.slice,
      feature: stream.features[f]!.name,
      block: BLOCK_COUNTS,
      body: encodeBlockCounts(counter.counts(plan.blocks.lengthMs, plan.startMs)),
    })),
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
