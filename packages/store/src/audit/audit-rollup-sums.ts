import { type Kysely, sql } from "kysely";
import type { Tables } from "../schema.js";
import type { Findings } from "./findings.js";

const LENGTH_MS = { hour: 3_600_000, day: 86_400_000 } as const;

/** Hour and day rollups hold the events of their panes, no more and no less. */
export async function auditRollupSums(db: Kysely<Tables>, stream: string, findings: Findings): Promise<void> {
  for (const level of ["hour", "day"] as const) {
    const starts = await db
      .selectFrom("rollup")
      .select("start_ms")
      .distinct()
      .where("stream", "=", stream)
      .where("level", "=", level)
      .orderBy("start_ms")
      .execute();
    for (const { start_ms } of starts) await auditOne(db, stream, level, start_ms, findings);
  }
}

/** One hour or day in one statement, so that what is compared was true at one moment. */
async function auditOne(
  db: Kysely<Tables>,
  stream: string,
  level: keyof typeof LENGTH_MS,
  startMs: number,
  findings: Findings,
): Promise<void> {
  const endMs = startMs + LENGTH_MS[level];
  const { rows } = await sql<{ slice: string; feature: string; events: number; panes: number }>`
    SELECT * FROM (
      SELECT long.slice, long.feature, long.events, (
        SELECT COALESCE(SUM(pane.events), 0) FROM rollup AS pane
        WHERE pane.stream = long.stream AND pane.level = 'pane' AND pane.slice = long.slice
          AND pane.feature = long.feature AND pane.start_ms >= ${startMs} AND pane.start_ms < ${endMs}
      ) AS panes
      FROM rollup AS long
      WHERE long.stream = ${stream} AND long.level = ${level} AND long.start_ms = ${startMs}
    ) AS sums WHERE panes <> events`.execute(db);
  for (const row of rows) {
    const where = `${level} ${new Date(startMs).toISOString()}, ${row.slice}, ${row.feature}`;
    findings.add(2, where, `the rollup holds ${row.events} events, its panes hold ${row.panes}`);
  }
}
