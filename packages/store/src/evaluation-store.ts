import type { Transaction } from "kysely";
import type { Engine } from "./engine/engine.js";
import { inChunks } from "./in-chunks.js";
import { insertLogbook } from "./logbook-store.js";
import type { EvaluationTable, FeatureStateTable, Tables } from "./schema.js";
import type {
  EvaluationCommit,
  EvaluationRow,
  EvaluationStore,
  FeatureState,
  FeatureStateRow,
  Lease,
  RollupRow,
  StreamProgress,
} from "./store.js";

/** Leases, progress, evaluations and feature states. */
export function evaluationStore({ db }: Engine): EvaluationStore {
  return {
    acquireLease: async (name, owner, nowMs, ttlMs) => {
      const row = await db
        .insertInto("lease")
        .values({ name, owner, token: 1, expires_at_ms: nowMs + ttlMs })
        .onConflict((conflict) =>
          conflict
            .column("name")
            .doUpdateSet((eb) => ({
              owner,
              // A new leader gets a new token, so that what the old one still has in hand is refused.
              token: eb
                .case()
                .when("lease.owner", "=", owner)
                .then(eb.ref("lease.token"))
                .else(eb("lease.token", "+", 1))
                .end(),
              expires_at_ms: nowMs + ttlMs,
            }))
            .where((eb) => eb.or([eb("lease.owner", "=", owner), eb("lease.expires_at_ms", "<=", nowMs)])),
        )
        .returning("token")
        .executeTakeFirst();
      return row === undefined ? null : { name, owner, token: row.token };
    },

    releaseLease: async (lease) => {
      await db.updateTable("lease").set({ expires_at_ms: 0 }).where(ofLease(lease)).execute();
    },

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
      const rows = await db
        .selectFrom("feature_state")
        .selectAll()
        .where("stream", "=", stream)
        .orderBy("feature")
        .orderBy("slice")
        .orderBy("horizon")
        .execute();
      return rows.map(stateRow);
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
      const rows = await select
        .orderBy("window_end_ms")
        .orderBy("slice")
        .orderBy("feature")
        .orderBy("horizon")
        .execute();
      return rows.map(evaluationRow);
    },

    commit: (batch) => db.transaction().execute((transaction) => writeBatch(transaction, batch)),
  };
}

function ofLease(lease: Lease) {
  // biome-ignore lint/suspicious/noExplicitAny: the filter is given to two kinds of query.
  return (eb: any) => eb.and({ name: lease.name, owner: lease.owner, token: lease.token });
}

async function writeBatch(
  transaction: Transaction<Tables>,
  batch: EvaluationCommit,
): Promise<"committed" | "fenced"> {
  const held = await transaction
    .updateTable("lease")
    .set((eb) => ({ token: eb.ref("token") }))
    .where(ofLease(batch.lease))
    .executeTakeFirst();
  if (held.numUpdatedRows === 0n) return "fenced";
  await writeProgress(transaction, batch.stream, batch.progress);
  await writeRollups(transaction, batch.stream, batch.rollups);
  for (const ids of inChunks(batch.settledSegments, 1)) {
    await transaction.deleteFrom("segment_pending").where("segment_id", "in", ids).execute();
  }
  await writeEvaluations(transaction, batch.evaluations);
  await writeStates(transaction, batch.states);
  for (const entry of batch.logbook) await insertLogbook(transaction, entry, { once: true });
  return "committed";
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
  const rows = rollups.map((row) => ({
    stream,
    level: row.level,
    start_ms: row.startMs,
    slice: row.slice,
    feature: row.feature,
    events: row.events,
    amended: row.amended ? 1 : 0,
    body: row.body,
  }));
  for (const chunk of inChunks(rows, 8)) {
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
  const rows = evaluations.map((row) => ({
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
    comparison: JSON.stringify(row.comparison),
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
  const rows = states.map((row) => ({
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
