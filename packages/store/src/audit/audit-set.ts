import type { Kysely, Selectable } from "kysely";
import type { SegmentSetTable, Tables } from "../schema.js";
import { segmentChecksum } from "../segment-checksum.js";
import { sliceKey } from "../slice-key.js";
import type { Findings } from "./findings.js";

/** One checkpoint: its segments and gaps are there as they were written, and each way of slicing holds its events once. */
export async function auditSet(
  db: Kysely<Tables>,
  set: Selectable<SegmentSetTable>,
  where: string,
  findings: Findings,
): Promise<void> {
  const range = `checkpoint ${set.from_offset} to ${set.to_offset - 1}`;
  const segments = await db
    .selectFrom("segment")
    .select(["pane_start_ms", "slice", "events", "body_crc"])
    .where("set_id", "=", set.id)
    .execute();
  if (segments.length !== set.segment_count) {
    const problem = `was written with ${set.segment_count} segments, ${segments.length} are there`;
    findings.add(1, where, `${range} ${problem}`);
  } else if (segmentChecksum(segments) !== set.segment_checksum) {
    findings.add(
      1,
      where,
      `${range}: a segment was altered after it was written (the checksum does not match)`,
    );
  }
  for (const [key, events] of eventsByKey(segments)) {
    if (events === set.events) continue;
    const problem = `the segments of ${key} hold ${events} events, the checkpoint counted ${set.events}`;
    findings.add(2, where, `${range}: ${problem}`);
  }
  await auditGaps(db, set, range, where, findings);
}

function eventsByKey(
  segments: readonly { readonly slice: string; readonly events: number }[],
): Map<string, number> {
  const byKey = new Map<string, number>([["all", 0]]);
  for (const { slice, events } of segments) {
    const key = sliceKey(slice);
    byKey.set(key, (byKey.get(key) ?? 0) + events);
  }
  return byKey;
}

async function auditGaps(
  db: Kysely<Tables>,
  set: Selectable<SegmentSetTable>,
  range: string,
  where: string,
  findings: Findings,
): Promise<void> {
  const gaps = await db
    .selectFrom("offset_gap")
    .select(["from_offset", "to_offset"])
    .where("set_id", "=", set.id)
    .orderBy("from_offset")
    .execute();
  const held = gaps.reduce((sum, gap) => sum + gap.to_offset - gap.from_offset, 0);
  if (gaps.length !== set.gap_count || held !== set.gap_offsets) {
    const written = `${set.gap_count} gaps of ${set.gap_offsets} offsets`;
    findings.add(1, where, `${range} was written with ${written}, ${gaps.length} of ${held} are there`);
  }
  let at = set.from_offset;
  for (const gap of gaps) {
    if (gap.from_offset < at || gap.to_offset > set.to_offset) {
      const name = `the gap ${gap.from_offset} to ${gap.to_offset - 1}`;
      findings.add(1, where, `${range}: ${name} lies outside of it or over another gap`);
    }
    at = Math.max(at, gap.to_offset);
  }
  const counted = set.events + set.dead_letter_events;
  const offsets = set.to_offset - set.from_offset - set.gap_offsets;
  if (counted > offsets) findings.add(1, where, `${range} counts ${counted} events in ${offsets} offsets`);
}
