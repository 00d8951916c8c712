import type { Transaction } from "kysely";
import { bodyChecksum } from "./body-checksum.js";
import { bodyBytes, inChunks } from "./in-chunks.js";
import { insertLogbook } from "./logbook-store.js";
import { keyColumns, ofPartition, partitionName } from "./partition-key.js";
import type { SegmentTable, Tables } from "./schema.js";
import { segmentChecksum } from "./segment-checksum.js";
import type { Checkpoint, CheckpointOutcome, OffsetGap, PartitionKey } from "./store.js";

/**
 * One checkpoint in the given transaction. The partition row is compared and set first: where epoch or offset is not as the writer
 * believes, nothing is written.
 */
export async function writeCheckpoint(
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
  const segments = checkpoint.segments.map((segment) => ({
    stream: checkpoint.stream,
    pane_start_ms: segment.paneStartMs,
    slice: segment.slice,
    events: segment.events,
    body_crc: bodyChecksum(segment.body),
    body: segment.body,
  }));
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
      segment_count: segments.length,
      segment_checksum: segmentChecksum(segments),
      gap_count: checkpoint.gaps.length,
      gap_offsets: sumOf(checkpoint.gaps.map((gap) => gap.toOffset - gap.fromOffset)),
      written_at_ms: checkpoint.atMs,
    })
    .returning("id")
    .executeTakeFirstOrThrow();
  for (const chunk of inChunks(segments, 7, bodyBytes)) await writeSegments(transaction, setId, chunk);
  for (const gap of checkpoint.gaps) await writeGap(transaction, setId, checkpoint, gap);
}

async function writeSegments(
  transaction: Transaction<Tables>,
  setId: number,
  segments: readonly Omit<SegmentTable, "id" | "set_id">[],
): Promise<void> {
  const written = await transaction
    .insertInto("segment")
    .values(segments.map((segment) => ({ ...segment, set_id: setId })))
    .returning(["id", "stream", "pane_start_ms"])
    .execute();
  await transaction
    .insertInto("segment_pending")
    .values(written.map(({ id, ...pane }) => ({ segment_id: id, ...pane })))
    .execute();
}

async function writeGap(
  transaction: Transaction<Tables>,
  setId: number,
  checkpoint: Checkpoint,
  { fromOffset, toOffset, reason }: OffsetGap,
): Promise<void> {
  const { atMs, stream } = checkpoint;
  await transaction
    .insertInto("offset_gap")
    .values({
      ...keyColumns(checkpoint),
      set_id: setId,
      from_offset: fromOffset,
      to_offset: toOffset,
      reason,
      at_ms: atMs,
    })
    .execute();
  const subject = partitionName(checkpoint);
  await insertLogbook(transaction, {
    atMs,
    stream,
    kind: "offset-gap",
    subject,
    sentence: `${subject}: offsets ${fromOffset} to ${toOffset - 1} were gone before they could be read (${reason})`,
    detail: { fromOffset, toOffset, reason },
  });
}

function sumOf(counts: readonly number[]): number {
  return counts.reduce((sum, count) => sum + count, 0);
}
