import { isMoorlineError } from "@moorline/errors";
import type { Kysely } from "kysely";
import { bodyChecksum } from "../body-checksum.js";
import type { Tables } from "../schema.js";
import { decodeSegmentBody } from "../segment-body.js";
import type { Findings } from "./findings.js";
import { addCounts, countDifference, countsOf, type KindSums, kindProblem, noCounts } from "./kind-sums.js";
import { snapshot } from "./snapshot.js";

/** Counts of what is in a pane's rollups, by slice, then feature. Maps, for names are data. */
type PaneSums = Map<string, Map<string, KindSums>>;

/** Invariant 2: in every segment and every pane rollup, a feature's counts by kind add up to the events that were seen. */
export async function auditPanes(db: Kysely<Tables>, stream: string, findings: Findings): Promise<void> {
  const panes = await db
    .selectFrom("segment")
    .select("pane_start_ms")
    .where("stream", "=", stream)
    .union((eb) =>
      eb
        .selectFrom("rollup")
        .select("start_ms as pane_start_ms")
        .where("stream", "=", stream)
        .where("level", "=", "pane"),
    )
    .orderBy("pane_start_ms")
    .execute();
  for (const { pane_start_ms } of panes) {
    await snapshot(db, async (reader) => {
      const sums = await auditSegments(reader, stream, pane_start_ms, findings);
      await auditRollups(reader, stream, pane_start_ms, sums, findings);
    });
  }
}

/** Looks into every segment of a pane, one at a time; returns the sums of those that the rollups contain. */
async function auditSegments(
  db: Kysely<Tables>,
  stream: string,
  paneStartMs: number,
  findings: Findings,
): Promise<PaneSums> {
  const sums: PaneSums = new Map();
  const segments = await db
    .selectFrom("segment")
    .leftJoin("segment_pending", "segment_pending.segment_id", "segment.id")
    .select(["segment.id", "segment_pending.segment_id as pending"])
    .where("segment.stream", "=", stream)
    .where("segment.pane_start_ms", "=", paneStartMs)
    .orderBy("segment.id")
    .execute();
  for (const { id, pending } of segments) {
    const segment = await db
      .selectFrom("segment")
      .select(["slice", "events", "body", "body_crc"])
      .where("id", "=", id)
      .executeTakeFirstOrThrow();
    const where = `${paneName(paneStartMs)}, ${segment.slice}, segment ${id}`;
    reading(findings, where, () => {
      const counts = segmentCounts(segment, where, findings);
      if (pending === null) addSegment(sums, segment.slice, counts);
    });
  }
  return sums;
}

/** Counts by feature of one segment, each held against the segment's events. */
function segmentCounts(
  segment: { readonly events: number; readonly body: Uint8Array; readonly body_crc: number },
  where: string,
  findings: Findings,
): Map<string, KindSums> {
  if (bodyChecksum(segment.body) !== segment.body_crc) {
    findings.add(2, where, "its bytes are not those that were written (the checksum does not match)");
  }
  const counts = new Map<string, KindSums>();
  for (const [feature, sketch] of decodeSegmentBody(segment.body)) {
    const inFeature = countsOf(sketch);
    const problem = kindProblem(inFeature, segment.events);
    if (problem !== null) findings.add(2, `${where}, ${feature}`, problem);
    counts.set(feature, inFeature);
  }
  return counts;
}

function addSegment(sums: PaneSums, slice: string, counts: ReadonlyMap<string, KindSums>): void {
  const features = sums.get(slice) ?? new Map<string, KindSums>();
  sums.set(slice, features);
  for (const [feature, inSegment] of counts) {
    const sum = features.get(feature) ?? noCounts();
    features.set(feature, sum);
    addCounts(sum, inSegment);
  }
}

/** Every rollup of the pane holds what its settled segments hold, and every settled feature has its rollup. */
async function auditRollups(
  db: Kysely<Tables>,
  stream: string,
  paneStartMs: number,
  sums: PaneSums,
  findings: Findings,
): Promise<void> {
  const rollups = db
    .selectFrom("rollup")
    .where("stream", "=", stream)
    .where("level", "=", "pane")
    .where("start_ms", "=", paneStartMs);
  for (const { slice } of await rollups.select("slice").distinct().execute()) {
    const rows = await rollups.select(["feature", "events", "body"]).where("slice", "=", slice).execute();
    for (const rollup of rows) {
      const expected = sums.get(slice)?.get(rollup.feature) ?? noCounts();
      sums.get(slice)?.delete(rollup.feature);
      const where = `${paneName(paneStartMs)}, ${slice}, ${rollup.feature}`;
      reading(findings, where, () => {
        const counts = countsOf(rollup.body);
        const problem = countDifference(counts, expected) ?? kindProblem(counts, rollup.events);
        if (problem !== null) findings.add(2, where, `the rollup is wrong: ${problem}`);
      });
    }
  }
  for (const [slice, features] of sums) {
    for (const feature of features.keys()) {
      const where = `${paneName(paneStartMs)}, ${slice}, ${feature}`;
      findings.add(2, where, "its segments are marked as rolled up, but there is no rollup");
    }
  }
}

/** Bytes that cannot be read are a finding, not the end of the audit. */
function reading(findings: Findings, where: string, read: () => void): void {
  try {
    read();
  } catch (error) {
    if (!isMoorlineError(error) || error.category !== "FORMAT") throw error;
    findings.add(2, where, error.message);
  }
}

function paneName(paneStartMs: number): string {
  return `pane ${new Date(paneStartMs).toISOString()}`;
}
