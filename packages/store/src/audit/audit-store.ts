import type { Kysely } from "kysely";
import type { AuditedStream, AuditFinding, AuditReport } from "../audit-report.js";
import type { Tables } from "../schema.js";
import { auditPanes } from "./audit-panes.js";
import { auditRollupSums } from "./audit-rollup-sums.js";
import { auditTiles } from "./audit-tiles.js";
import { Findings } from "./findings.js";

/** Proves invariants 1 and 2 from what is stored, a partition and a pane at a time, so that memory does not grow with the store. */
export async function auditStore(db: Kysely<Tables>, stream?: string): Promise<AuditReport> {
  const names = stream === undefined ? await streamNames(db) : [stream];
  const streams: AuditedStream[] = [];
  const findings: AuditFinding[] = [];
  for (const name of names) {
    const found = new Findings(name);
    await auditTiles(db, name, found);
    await auditPanes(db, name, found);
    await auditRollupSums(db, name, found);
    streams.push(await totals(db, name));
    findings.push(...found.list());
  }
  return { clean: findings.length === 0, streams, findings };
}

async function streamNames(db: Kysely<Tables>): Promise<readonly string[]> {
  const [partitions, sets] = await Promise.all([
    db.selectFrom("partition").select("stream").distinct().execute(),
    db.selectFrom("segment_set").select("stream").distinct().execute(),
  ]);
  return [...new Set([...partitions, ...sets].map((row) => row.stream))].toSorted();
}

async function totals(db: Kysely<Tables>, stream: string): Promise<AuditedStream> {
  const count = async (table: "partition" | "segment_set" | "segment" | "offset_gap") => {
    const row = await db
      .selectFrom(table)
      .select((eb) => eb.fn.countAll<number>().as("rows"))
      .where("stream", "=", stream)
      .executeTakeFirstOrThrow();
    return Number(row.rows);
  };
  const sums = await db
    .selectFrom("segment_set")
    .select((eb) => [
      eb.fn.sum<number>("events").as("events"),
      eb.fn.sum<number>("dead_letter_events").as("dead"),
    ])
    .where("stream", "=", stream)
    .executeTakeFirstOrThrow();
  return {
    stream,
    partitions: await count("partition"),
    checkpoints: await count("segment_set"),
    segments: await count("segment"),
    events: Number(sums.events ?? 0),
    deadLetters: Number(sums.dead ?? 0),
    gaps: await count("offset_gap"),
  };
}
