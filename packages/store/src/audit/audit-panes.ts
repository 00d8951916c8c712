import { isMoorlineError } from "@moorline/errors";
import type { Kysely } from "kysely";
import type { Tables } from "../schema.js";
import { decodeSegmentBody } from "../segment-body.js";
import type { Findings } from "./findings.js";
import { addCounts, countDifference, countsOf, type KindSums, kindProblem, noCounts } from "./kind-sums.js";

/** Sums by slice, then feature. Maps, for names are data. */
type PaneSums = Map<string, Map<string, KindSums>>;

/** Invariant 2: in every segment and every pane rollup, a feature's counts by kind add up to the events that were seen. */
export async function auditPanes(db: Kysely<Tables>, stream: string, findings: Findings): Promise<void> {
  const panes = await db
    .selectFrom("segment")
    .select("pane_start_ms")
    .distinct()
    .where("stream", "=", stream)
    .orderBy("pane_start_ms")
    .execute();
  for (const { pane_start_ms } of panes) {
    const sums = await segmentSums(db, stream, pane_start_ms, findings);
    await auditPaneRollups(db, stream, pane_start_ms, sums, findings);
  }
}

async function segmentSums(
  db: Kysely<Tables>,
  stream: string,
  paneStartMs: number,
  findings: Findings,
): Promise<PaneSums> {
  const sums: PaneSums = new Map();
  const ids = await db
    .selectFrom("segment")
    .select("id")
    .where("stream", "=", stream)
    .where("pane_start_ms", "=", paneStartMs)
    .orderBy("id")
    .execute();
  for (const { id } of ids) {
    const segment = await db
      .selectFrom("segment")
      .select(["slice", "events", "body"])
      .where("id", "=", id)
      .executeTakeFirstOrThrow();
    const where = `${paneName(paneStartMs)}, ${segment.slice}, segment ${id}`;
    const features = sums.get(segment.slice) ?? new Map<string, KindSums>();
    sums.set(segment.slice, features);
    reading(findings, where, () => {
      for (const [feature, sketch] of decodeSegmentBody(segment.body)) {
        const counts = countsOf(sketch);
        const problem = kindProblem(counts, segment.events);
        if (problem !== null) findings.add(2, `${where}, ${feature}`, problem);
        const sum = features.get(feature) ?? noCounts();
        features.set(feature, sum);
        addCounts(sum, counts);
      }
    });
  }
  return sums;
}

/** A pane with segments still waiting has a rollup that is behind them; it is looked at when they are settled. */
async function auditPaneRollups(
  db: Kysely<Tables>,
  stream: string,
  paneStartMs: number,
  sums: PaneSums,
  findings: Findings,
): Promise<void> {
  const waiting = await db
    .selectFrom("segment_pending")
    .select("segment_id")
    .where("stream", "=", stream)
    .where("pane_start_ms", "=", paneStartMs)
    .limit(1)
    .execute();
  if (waiting.length > 0) return;
  for (const [slice, features] of sums) {
    const rows = await db
      .selectFrom("rollup")
      .select(["feature", "body"])
      .where("stream", "=", stream)
      .where("level", "=", "pane")
      .where("start_ms", "=", paneStartMs)
      .where("slice", "=", slice)
      .execute();
    const rolledUp = new Map(rows.map((row) => [row.feature, row.body]));
    for (const [feature, expected] of features) {
      const where = `${paneName(paneStartMs)}, ${slice}, ${feature}`;
      const body = rolledUp.get(feature);
      if (body === undefined) {
        findings.add(2, where, "its segments are marked as rolled up, but there is no rollup");
        continue;
      }
      reading(findings, where, () => {
        const difference = countDifference(countsOf(body), expected);
        if (difference !== null) findings.add(2, where, `the rollup is wrong: ${difference}`);
      });
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
