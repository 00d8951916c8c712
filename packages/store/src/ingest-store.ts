import type { Transaction } from "kysely";
import { checkCheckpoint } from "./check-checkpoint.js";
import type { Engine } from "./engine/engine.js";
import { inChunks } from "./in-chunks.js";
import { insertLogbook } from "./logbook-store.js";
import type { PartitionTable, Tables } from "./schema.js";
import type {
  Checkpoint,
  CheckpointOutcome,
  IngestStore,
  PartitionKey,
  PartitionRow,
  PartitionStatus,
} from "./store.js";

/** Partitions, owner epochs and segments. Every transaction writes first: SQLite then never has to upgrade a read lock. */
export function ingestStore({ db }: Engine): IngestStore {
  return {
    claimPartition: async (claim) => {
      const row = await db
        .insertInto("partition")
        .values({
          ...keyColumns(claim),
          owner: claim.owner,
          epoch: 1,
          start_offset: claim.startOffset,
          next_offset: claim.startOffset,
          status: "reading",
          source_id: claim.sourceId,
          max_event_ms: null,
          last_event_at_ms: null,
          updated_at_ms: claim.atMs,
          events: 0,
          late_events: 0,
          dead_letters: 0,
        })
        .onConflict((conflict) =>
          conflict.columns(["stream", "topic", "partition"]).doUpdateSet((eb) => ({
            owner: claim.owner,
            epoch: eb("partition.epoch", "+", 1),
            updated_at_ms: claim.atMs,
          })),
        )
        .returning(["epoch", "next_offset", "source_id", "status"])
        .executeTakeFirstOrThrow();
      return {
        epoch: row.epoch,
        nextOffset: row.next_offset,
        sourceId: row.source_id,
        status: row.status as PartitionStatus,
      };
    },

    commitCheckpoint: async (checkpoint) => {
      checkCheckpoint(checkpoint);
      return db.transaction().execute((transaction) => writeCheckpoint(transaction, checkpoint));
    },

    setPartitionStatus: (key, epoch, status, detail, atMs) =>
      db.transaction().execute(async (transaction) => {
        const changed = await transaction
          .updateTable("partition")
          .set({ status, updated_at_ms: atMs })
          .where(ofPartition(key))
          .where("epoch", "=", epoch)
          .where("status", "!=", status)
          .executeTakeFirst();
        if (changed.numUpdatedRows > 0n) {
          await insertLogbook(transaction, {
            atMs,
            stream: key.stream,
            kind: status === "log-rewound" ? "log-rewound" : "partition-status",
            subject: partitionName(key),
            sentence: `${partitionName(key)} is now ${status}: ${detail}`,
            detail: { status, epoch },
          });
          return true;
        }
        const held = await transaction
          .selectFrom("partition")
          .select("epoch")
          .where(ofPartition(key))
          .where("epoch", "=", epoch)
          .executeTakeFirst();
        return held !== undefined;
      }),

    partitions: async (stream) => {
      const rows = await db
        .selectFrom("partition")
        .selectAll()
        .where("stream", "=", stream)
        .orderBy("topic")
        .orderBy("partition")
        .execute();
      return rows.map(partitionRow);
    },

    gaps: async (stream) => {
      const rows = await db
        .selectFrom("offset_gap")
        .selectAll()
        .where("stream", "=", stream)
        .orderBy("id")
        .execute();
      return rows.map((row) => ({
        topic: row.topic,
        partition: row.partition,
        fromOffset: row.from_offset,
        toOffset: row.to_offset,
        reason: row.reason,
      }));
    },
  };
}

/** `topic/partition`, as the logbook and the audit name it. */
export function partitionName(key: { readonly topic: string; readonly partition: number }): string {
  return `${key.topic}/${key.partition}`;
}

function keyColumns(key: PartitionKey) {
  return { stream: key.stream, topic: key.topic, partition: key.partition };
}

function ofPartition(key: PartitionKey) {
  // biome-ignore lint/suspicious/noExplicitAny: one filter for every table that carries a partition's key.
  return (eb: any) => eb.and(keyColumns(key));
}

async function writeCheckpoint(
  transaction: Transaction<Tables>,
  checkpoint: Checkpoint,
): Promise<CheckpointOutcome> {
  const deadLetters = sumOf(Object.values(checkpoint.deadLetters));
  const moved = await transaction
    .updateTable("partition")
    .set((eb) => ({
      next_offset: checkpoint.toOffset,
      updated_at_ms: checkpoint.atMs,
      events: eb("events", "+", checkpoint.events),
      late_events: eb("late_events", "+", checkpoint.lateEvents),
      dead_letters: eb("dead_letters", "+", deadLetters),
      ...(checkpoint.events > 0 ? { last_event_at_ms: checkpoint.atMs } : {}),
      ...(checkpoint.maxEventMs === null
        ? {}
        : {
            max_event_ms: eb
              .case()
              .when("max_event_ms", ">", checkpoint.maxEventMs)
              .then(eb.ref("max_event_ms"))
              .else(checkpoint.maxEventMs)
              .end(),
          }),
    }))
    .where(ofPartition(checkpoint))
    .where("epoch", "=", checkpoint.epoch)
    .where("next_offset", "=", checkpoint.fromOffset)
    .executeTakeFirst();
  if (moved.numUpdatedRows === 0n) return fencedOutcome(transaction, checkpoint);
  if (checkpoint.toOffset > checkpoint.fromOffset)
    await writeSegmentSet(transaction, checkpoint, deadLetters);
  return { outcome: "committed" };
}

async function fencedOutcome(
  transaction: Transaction<Tables>,
  key: PartitionKey,
): Promise<CheckpointOutcome> {
  const row = await transaction
    .selectFrom("partition")
    .select(["epoch", "next_offset"])
    .where(ofPartition(key))
    .executeTakeFirst();
  return { outcome: "fenced", epoch: row?.epoch ?? 0, nextOffset: row?.next_offset ?? 0 };
}

async function writeSegmentSet(
  transaction: Transaction<Tables>,
  checkpoint: Checkpoint,
  deadLetters: number,
): Promise<void> {
  const { id: setId } = await transaction
    .insertInto("segment_set")
    .values({
      ...keyColumns(checkpoint),
      epoch: checkpoint.epoch,
      from_offset: checkpoint.fromOffset,
      to_offset: checkpoint.toOffset,
      events: checkpoint.events,
      late_events: checkpoint.lateEvents,
      dead_letters: JSON.stringify(checkpoint.deadLetters),
      dead_letter_events: deadLetters,
      segment_count: checkpoint.segments.length,
      written_at_ms: checkpoint.atMs,
    })
    .returning("id")
    .executeTakeFirstOrThrow();
  const rows = checkpoint.segments.map((segment) => ({
    set_id: setId,
    stream: checkpoint.stream,
    pane_start_ms: segment.paneStartMs,
    slice: segment.slice,
    events: segment.events,
    body: segment.body,
  }));
  for (const chunk of inChunks(rows, 6)) {
    const ids = await transaction
      .insertInto("segment")
      .values(chunk)
      .returning(["id", "pane_start_ms"])
      .execute();
    const pending = ids.map((row) => ({
      segment_id: row.id,
      stream: checkpoint.stream,
      pane_start_ms: row.pane_start_ms,
    }));
    await transaction.insertInto("segment_pending").values(pending).execute();
  }
  await writeGaps(transaction, checkpoint);
}

async function writeGaps(transaction: Transaction<Tables>, checkpoint: Checkpoint): Promise<void> {
  for (const gap of checkpoint.gaps) {
    await transaction
      .insertInto("offset_gap")
      .values({
        ...keyColumns(checkpoint),
        from_offset: gap.fromOffset,
        to_offset: gap.toOffset,
        reason: gap.reason,
        at_ms: checkpoint.atMs,
      })
      .execute();
    await insertLogbook(transaction, {
      atMs: checkpoint.atMs,
      stream: checkpoint.stream,
      kind: "offset-gap",
      subject: partitionName(checkpoint),
      sentence: `${partitionName(checkpoint)}: offsets ${gap.fromOffset} to ${gap.toOffset - 1} were gone before they could be read (${gap.reason})`,
      detail: { fromOffset: gap.fromOffset, toOffset: gap.toOffset, reason: gap.reason },
    });
  }
}

function partitionRow(row: PartitionTable): PartitionRow {
  return {
    stream: row.stream,
    topic: row.topic,
    partition: row.partition,
    owner: row.owner,
    epoch: row.epoch,
    startOffset: row.start_offset,
    nextOffset: row.next_offset,
    status: row.status as PartitionStatus,
    sourceId: row.source_id,
    maxEventMs: row.max_event_ms,
    lastEventAtMs: row.last_event_at_ms,
    updatedAtMs: row.updated_at_ms,
    events: row.events,
    lateEvents: row.late_events,
    deadLetters: row.dead_letters,
  };
}

function sumOf(counts: readonly number[]): number {
  return counts.reduce((sum, count) => sum + count, 0);
}
