import type { Engine } from "./engine/engine.js";
import { inOrder } from "./in-order.js";
import { leases } from "./leases.js";
import type { EvaluationTable, FeatureStateTable } from "./schema.js";
import type { EvaluationRow, EvaluationStore, FeatureState, FeatureStateRow } from "./store.js";
import { writeEvaluationCommit } from "./write-evaluation-commit.js";

/** Leases, progress, evaluations and feature states. */
export function evaluationStore({ db }: Engine): EvaluationStore {
  return {
    ...leases(db),

    progress: async (stream) => {
      const row = await db
        .selectFrom("stream_progress")
        .selectAll()
        .where("stream", "=", stream)
        .executeTakeFirst();
      return row === undefined
        ? null
        : {
            watermarkMs: row.watermark_ms,
            closedThroughMs: row.closed_through_ms,
            evaluatedAtMs: row.evaluated_at_ms,
          };
    },

    states: async (stream) => {
      const rows = await db.selectFrom("feature_state").selectAll().where("stream", "=", stream).execute();
      return inOrder(rows, (row) => [row.feature, row.slice, row.horizon]).map(stateRow);
    },

    evaluations: async (query) => {
      let select = db
        .selectFrom("evaluation")
        .selectAll()
        .where("stream", "=", query.stream)
        .where("window_end_ms", ">", query.fromMs)
        .where("window_end_ms", "<=", query.toMs);
      if (query.horizon !== undefined) select = select.where("horizon", "=", query.horizon);
      if (query.slice !== undefined) select = select.where("slice", "=", query.slice);
      if (query.feature !== undefined) select = select.where("feature", "=", query.feature);
      if (query.baselineId !== undefined) select = select.where("baseline_id", "=", query.baselineId);
      const rows = await select.execute();
      const ordered = inOrder(rows, (row) => [
        row.window_end_ms,
        row.slice,
        row.feature,
        row.horizon,
        row.baseline_id,
      ]);
      return ordered.map(evaluationRow);
    },

    commit: (batch) => db.transaction().execute((transaction) => writeEvaluationCommit(transaction, batch)),
  };
}

function evaluationRow(row: EvaluationTable): EvaluationRow {
  return {
    stream: row.stream,
    horizon: row.horizon,
    windowStartMs: row.window_start_ms,
    windowEndMs: row.window_end_ms,
    baselineId: row.baseline_id,
    slice: row.slice,
    feature: row.feature,
    state: row.state as FeatureState,
    events: row.events,
    amended: row.amended === 1,
    comparison: JSON.parse(row.comparison) as unknown,
    evaluatedAtMs: row.evaluated_at_ms,
  };
}

function stateRow(row: FeatureStateTable): FeatureStateRow {
  return {
    stream: row.stream,
    horizon: row.horizon,
    slice: row.slice,
    feature: row.feature,
    state: row.state as FeatureState,
    sinceMs: row.since_ms,
    windowEndMs: row.window_end_ms,
    baselineId: row.baseline_id,
    memory: JSON.parse(row.memory) as unknown,
    sentence: row.sentence,
  };
}
