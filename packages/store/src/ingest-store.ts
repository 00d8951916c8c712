import { checkCheckpoint } from "./check-checkpoint.js";
import { checkNames } from "./check-names.js";
import type { Engine } from "./engine/engine.js";
import { inOrder } from "./in-order.js";
import { insertLogbook } from "./logbook-store.js";
import { keyColumns, ofPartition, partitionName } from "./partition-key.js";
import type { PartitionTable } from "./schema.js";
import type { IngestStore, PartitionRow, PartitionStatus } from "./store.js";
import { writeCheckpoint } from "./write-checkpoint.js";

/** Partitions, owner epochs and segments. */
export function ingestStore({ db }: Engine): IngestStore {
  return {
    claimPartition: async (claim) => {
      checkNames([claim.stream, claim.topic]);
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
      const rows = await db.selectFrom("partition").selectAll().where("stream", "=", stream).execute();
      return inOrder(rows, (row) => [row.topic, row.partition]).map(partitionRow);
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
