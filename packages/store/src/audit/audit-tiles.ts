import type { Kysely, Selectable } from "kysely";
import { ofPartition, partitionName } from "../partition-key.js";
import type { PartitionTable, SegmentSetTable, Tables } from "../schema.js";
import type { PartitionKey } from "../store.js";
import { auditSet } from "./audit-set.js";
import type { Findings } from "./findings.js";
import { snapshot } from "./snapshot.js";

const PAGE = 500;

/** Invariant 1: the checkpoints of each partition tile its offsets from its start to where it stands, and add up to its sums. */
export async function auditTiles(db: Kysely<Tables>, stream: string, findings: Findings): Promise<void> {
  const partitions = await db
    .selectFrom("partition")
    .select(["stream", "topic", "partition"])
    .where("stream", "=", stream)
    .execute();
  for (const key of partitions) await snapshot(db, (reader) => auditPartition(reader, key, findings));
  await auditStrays(db, stream, findings);
}

async function auditPartition(db: Kysely<Tables>, key: PartitionKey, findings: Findings): Promise<void> {
  const partition = await db
    .selectFrom("partition")
    .selectAll()
    .where(ofPartition(key))
    .executeTakeFirstOrThrow();
  const where = partitionName(partition);
  const sums = { events: 0, late: 0, dead: 0 };
  let at = partition.start_offset;
  for await (const set of setsOf(db, partition)) {
    const problem = tileProblem(at, set);
    if (problem !== null) findings.add(1, where, problem);
    at = Math.max(at, set.to_offset);
    sums.events += set.events;
    sums.late += set.late_events;
    sums.dead += set.dead_letter_events;
    await auditSet(db, set, where, findings);
  }
  const problem = endProblem(at, partition.next_offset);
  if (problem !== null) findings.add(1, where, problem);
  const kept = { events: partition.events, late: partition.late_events, dead: partition.dead_letters };
  for (const kind of ["events", "late", "dead"] as const) {
    if (kept[kind] === sums[kind]) continue;
    findings.add(
      1,
      where,
      `the partition says ${kept[kind]} (${kind}), its checkpoints add up to ${sums[kind]}`,
    );
  }
}

function tileProblem(at: number, set: Selectable<SegmentSetTable>): string | null {
  if (set.to_offset <= set.from_offset) {
    return `the checkpoint that starts at ${set.from_offset} ends at ${set.to_offset}, not after it`;
  }
  if (set.from_offset > at) return `offsets ${at} to ${set.from_offset - 1} are covered by no checkpoint`;
  if (set.from_offset === at) return null;
  const end = Math.min(at, set.to_offset) - 1;
  return `offsets ${set.from_offset} to ${end} are covered by two checkpoints`;
}

function endProblem(at: number, nextOffset: number): string | null {
  if (at < nextOffset) return `offsets ${at} to ${nextOffset - 1} are covered by no checkpoint`;
  return at > nextOffset ? `the next offset is ${nextOffset}, but checkpoints reach to ${at - 1}` : null;
}

/** The checkpoints of a partition by offset, a page at a time. */
async function* setsOf(
  db: Kysely<Tables>,
  partition: PartitionTable,
): AsyncGenerator<Selectable<SegmentSetTable>> {
  let after = -1;
  for (;;) {
    const page = await db
      .selectFrom("segment_set")
      .selectAll()
      .where(ofPartition(partition))
      .where("from_offset", ">", after)
      .orderBy("from_offset")
      .limit(PAGE)
      .execute();
    yield* page;
    if (page.length < PAGE) return;
    after = page.at(-1)!.from_offset;
  }
}

/** Checkpoints and segments that belong to nothing. One statement each, so each sees one moment. */
async function auditStrays(db: Kysely<Tables>, stream: string, findings: Findings): Promise<void> {
  const sets = await db
    .selectFrom("segment_set")
    .leftJoin("partition", (join) =>
      join
        .onRef("partition.stream", "=", "segment_set.stream")
        .onRef("partition.topic", "=", "segment_set.topic")
        .onRef("partition.partition", "=", "segment_set.partition"),
    )
    .select(["segment_set.topic", "segment_set.partition"])
    .distinct()
    .where("segment_set.stream", "=", stream)
    .where("partition.stream", "is", null)
    .execute();
  for (const set of sets) findings.add(1, partitionName(set), "there are checkpoints but no partition");
  const strays = await db
    .selectFrom("segment")
    .leftJoin("segment_set", "segment_set.id", "segment.set_id")
    .select(["segment.id", "segment.slice"])
    .where("segment.stream", "=", stream)
    .where("segment_set.id", "is", null)
    .limit(PAGE)
    .execute();
  for (const stray of strays) {
    findings.add(1, `segment ${stray.id}`, `the checkpoint of this segment (${stray.slice}) is gone`);
  }
}
