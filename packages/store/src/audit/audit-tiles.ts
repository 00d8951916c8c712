import type { Kysely } from "kysely";
import { partitionName } from "../partition-key.js";
import type { PartitionTable, SegmentSetTable, Tables } from "../schema.js";
import type { Findings } from "./findings.js";

const PAGE = 500;

type SetRow = Pick<
  SegmentSetTable,
  "from_offset" | "to_offset" | "events" | "late_events" | "dead_letter_events" | "segment_count"
> & {
  readonly id: number;
};

/** Invariant 1: the checkpoints of each partition tile its offsets from its start to where it stands, and add up to its sums. */
export async function auditTiles(db: Kysely<Tables>, stream: string, findings: Findings): Promise<void> {
  const partitions = await db.selectFrom("partition").selectAll().where("stream", "=", stream).execute();
  for (const partition of partitions) await auditPartition(db, partition, findings);
  await auditStrays(db, stream, partitions, findings);
}

async function auditPartition(
  db: Kysely<Tables>,
  partition: PartitionTable,
  findings: Findings,
): Promise<void> {
  const where = partitionName(partition);
  const sums = { events: 0, late: 0, dead: 0 };
  let at = partition.start_offset;
  for await (const set of setsOf(db, partition)) {
    if (set.from_offset > at)
      findings.add(1, where, `offsets ${at} to ${set.from_offset - 1} are covered by no checkpoint`);
    if (set.from_offset < at)
      findings.add(1, where, `offsets ${set.from_offset} to ${at - 1} are covered by two checkpoints`);
    at = Math.max(at, set.to_offset);
    sums.events += set.events;
    sums.late += set.late_events;
    sums.dead += set.dead_letter_events;
    if (set.events + set.dead_letter_events > set.to_offset - set.from_offset) {
      findings.add(
        1,
        where,
        `checkpoint ${set.from_offset} to ${set.to_offset - 1} counts more events than it has offsets`,
      );
    }
    await auditSet(db, set, where, findings);
  }
  if (at < partition.next_offset) {
    findings.add(1, where, `offsets ${at} to ${partition.next_offset - 1} are covered by no checkpoint`);
  }
  if (at > partition.next_offset) {
    findings.add(1, where, `the next offset is ${partition.next_offset}, but checkpoints reach to ${at - 1}`);
  }
  const kept = { events: partition.events, late: partition.late_events, dead: partition.dead_letters };
  for (const kind of ["events", "late", "dead"] as const) {
    if (kept[kind] !== sums[kind]) {
      findings.add(
        1,
        where,
        `the partition says ${kept[kind]} (${kind}), its checkpoints add up to ${sums[kind]}`,
      );
    }
  }
}

/** The checkpoints of a partition by offset, a page at a time. */
async function* setsOf(db: Kysely<Tables>, partition: PartitionTable): AsyncGenerator<SetRow> {
  let after = -1;
  for (;;) {
    const page = await db
      .selectFrom("segment_set")
      .select([
        "id",
        "from_offset",
        "to_offset",
        "events",
        "late_events",
        "dead_letter_events",
        "segment_count",
      ])
      .where("stream", "=", partition.stream)
      .where("topic", "=", partition.topic)
      .where("partition", "=", partition.partition)
      .where("from_offset", ">", after)
      .orderBy("from_offset")
      .limit(PAGE)
      .execute();
    yield* page;
    if (page.length < PAGE) return;
    after = page.at(-1)!.from_offset;
  }
}

/** A checkpoint's segments are all there, and each way of slicing holds its events once. */
async function auditSet(db: Kysely<Tables>, set: SetRow, where: string, findings: Findings): Promise<void> {
  const segments = await db
    .selectFrom("segment")
    .select(["slice", "events"])
    .where("set_id", "=", set.id)
    .execute();
  const range = `checkpoint ${set.from_offset} to ${set.to_offset - 1}`;
  if (segments.length !== set.segment_count) {
    findings.add(
      1,
      where,
      `${range} was written with ${set.segment_count} segments, ${segments.length} are there`,
    );
  }
  const byKey = new Map<string, number>([["all", 0]]);
  for (const { slice, events } of segments) {
    const key = slice === "all" ? "all" : slice.slice(0, slice.indexOf("="));
    byKey.set(key, (byKey.get(key) ?? 0) + events);
  }
  for (const [key, events] of byKey) {
    if (events !== set.events) {
      findings.add(
        2,
        where,
        `${range}: the segments of ${key} hold ${events} events, the checkpoint counted ${set.events}`,
      );
    }
  }
}

/** Checkpoints and segments that belong to nothing. */
async function auditStrays(
  db: Kysely<Tables>,
  stream: string,
  partitions: readonly PartitionTable[],
  findings: Findings,
): Promise<void> {
  const known = new Set(partitions.map(partitionName));
  const sets = await db
    .selectFrom("segment_set")
    .select(["topic", "partition"])
    .distinct()
    .where("stream", "=", stream)
    .execute();
  for (const set of sets) {
    if (!known.has(partitionName(set)))
      findings.add(1, partitionName(set), "there are checkpoints but no partition");
  }
  const strays = await db
    .selectFrom("segment")
    .leftJoin("segment_set", "segment_set.id", "segment.set_id")
    .select(["segment.id", "segment.slice"])
    .where("segment.stream", "=", stream)
    .where("segment_set.id", "is", null)
    .limit(PAGE)
    .execute();
  for (const stray of strays)
    findings.add(1, `segment ${stray.id}`, `the checkpoint of this segment (${stray.slice}) is gone`);
}
