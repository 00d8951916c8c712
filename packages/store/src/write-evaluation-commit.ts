import type { Transaction } from "kysely";
import { checkNames } from "./check-names.js";
import { bodyBytes, inChunks } from "./in-chunks.js";
import { holdLease } from "./leases.js";
import { insertLogbook } from "./logbook-store.js";
import type { Tables } from "./schema.js";
import type { EvaluationCommit, EvaluationRow, FeatureStateRow, RollupRow, StreamProgress } from "./store.js";

/**
 * All that follows from closing panes, in the given transaction. The lease row is touched first: where its token is no longer the
 * writer's, nothing is written. Rows are upserted by their keys, so the same commit again changes nothing.
 */
export async function writeEvaluationCommit(
  transaction: Transaction<Tables>,
  batch: EvaluationCommit,
): Promise<"committed" | "fenced"> {
  checkBatchNames(batch);
  if (!(await holdLease(transaction, batch.lease))) return "fenced";
  if (batch.progress !== null) await writeProgress(transaction, batch.stream, batch.progress);
  await writeRollups(transaction, batch.stream, batch.rollups);
  for (const ids of inChunks(batch.settledSegments, 1)) {
    await transaction.deleteFrom("segment_pending").where("segment_id", "in", ids).execute();
  }
  await writeEvaluations(transaction, batch.evaluations);
  await writeStates(transaction, batch.states);
  for (const entry of batch.logbook) await insertLogbook(transaction, entry, { once: true });
  return "committed";
}

function checkBatchNames({ stream, rollups, evaluations, states }: EvaluationCommit): void {
  for (const row of rollups) checkNames([stream, row.slice, row.feature]);
  for (const row of evaluations)
    checkNames([row.stream, row.horizon, row.slice, row.feature, row.baselineId]);
  for (const row of states) checkNames([row.stream, row.horizon, row.slice, row.feature]);
}

async function writeProgress(
  transaction: Transaction<Tables>,
  stream: string,
  progress: StreamProgress,
): Promise<void> {
  const columns = {
    watermark_ms: progress.watermarkMs,
    closed_through_ms: progress.closedThroughMs,
    evaluated_at_ms: progress.evaluatedAtMs,
  };
  await transaction
    .insertInto("stream_progress")
    .values({ stream, ...columns })
    .onConflict((conflict) => conflict.column("stream").doUpdateSet(columns))
    .execute();
}

async function writeRollups(
  transaction: Transaction<Tables>,
  stream: string,
  rollups: readonly RollupRow[],
): Promise<void> {
  const rows = latest(rollups, (row) => [row.level, row.startMs, row.slice, row.feature]).map((row) => ({
    stream,
    level: row.level,
    start_ms: row.startMs,
    slice: row.slice,
    feature: row.feature,
    events: row.events,
    amended: row.amended ? 1 : 0,
    body: row.body,
  }));
  await writeSlices(transaction, stream, rollups);
  for (const chunk of inChunks(rows, 8, bodyBytes)) {
    await transaction
      .insertInto("rollup")
      .values(chunk)
      .onConflict((conflict) =>
        conflict.columns(["stream", "level", "slice", "feature", "start_ms"]).doUpdateSet((eb) => ({
          events: eb.ref("excluded.events"),
          amended: eb.ref("excluded.amended"),
          body: eb.ref("excluded.body"),
        })),
      )
      .execute();
  }
}

async function writeEvaluations(
  transaction: Transaction<Tables>,
  evaluations: readonly EvaluationRow[],
): Promise<void> {
  const rows = latest(evaluations, (row) => [
    row.stream,
    row.horizon,
    row.slice,
    row.feature,
    row.windowEndMs,
    row.baselineId,
  ]).map((row) => ({
    stream: row.stream,
    horizon: row.horizon,
    window_start_ms: row.windowStartMs,
    window_end_ms: row.windowEndMs,
    baseline_id: row.baselineId,
    slice: row.slice,
    feature: row.feature,
    state: row.state,
    events: row.events,
    amended: row.amended ? 1 : 0,
    comparison: JSON.stringify(row.comparison ?? null),
    evaluated_at_ms: row.evaluatedAtMs,
  }));
  for (const chunk of inChunks(rows, 12)) {
    await transaction
      .insertInto("evaluation")
      .values(chunk)
      .onConflict((conflict) =>
        conflict
          .columns(["stream", "horizon", "slice", "feature", "window_end_ms", "baseline_id"])
          .doUpdateSet((eb) => ({
            state: eb.ref("excluded.state"),
            events: eb.ref("excluded.events"),
            amended: eb.ref("excluded.amended"),
            comparison: eb.ref("excluded.comparison"),
            evaluated_at_ms: eb.ref("excluded.evaluated_at_ms"),
          })),
      )
      .execute();
  }
}

async function writeStates(
  transaction: Transaction<Tables>,
  states: readonly FeatureStateRow[],
): Promise<void> {
  const rows = latest(states, (row) => [row.stream, row.horizon, row.slice, row.feature]).map((row) => ({
    stream: row.stream,
    horizon: row.horizon,
    slice: row.slice,
    feature: row.feature,
    state: row.state,
    since_ms: row.sinceMs,
    window_end_ms: row.windowEndMs,
    baseline_id: row.baselineId,
    memory: JSON.stringify(row.memory ?? null),
    sentence: row.sentence,
  }));
  for (const chunk of inChunks(rows, 10)) {
    await transaction
      .insertInto("feature_state")
      .values(chunk)
      .onConflict((conflict) =>
        conflict.columns(["stream", "horizon", "slice", "feature"]).doUpdateSet((eb) => ({
          state: eb.ref("excluded.state"),
          since_ms: eb.ref("excluded.since_ms"),
          window_end_ms: eb.ref("excluded.window_end_ms"),
          baseline_id: eb.ref("excluded.baseline_id"),
          memory: eb.ref("excluded.memory"),
          sentence: eb.ref("excluded.sentence"),
        })),
      )
      .execute();
  }
}

async function writeSlices(
  transaction: Transaction<Tables>,
  stream: string,
  rollups: readonly RollupRow[],
): Promise<void> {
  const slices = [...new Set(rollups.map((row) => row.slice))];
  for (const chunk of inChunks(slices, 2)) {
    await transaction
      .insertInto("stream_slice")
      .values(chunk.map((slice) => ({ stream, slice })))
      .onConflict((conflict) => conflict.columns(["stream", "slice"]).doNothing())
      .execute();
  }
}

/** Of rows with one key the last: a round may state a thing twice, and PostgreSQL upserts a row only once a statement. */
function latest<T>(rows: readonly T[], keyOf: (row: T) => readonly unknown[]): readonly T[] {
  return [...new Map(rows.map((row) => [JSON.stringify(keyOf(row)), row])).values()];
}
