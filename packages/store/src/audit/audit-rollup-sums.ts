import { type Kysely, sql } from "kysely";
import type { Tables } from "../schema.js";
import type { Findings } from "./findings.js";

const LENGTH_MS = { hour: 3_600_000, day: 86_400_000 } as const;

/** Hour and day rollups hold the events of their panes, no more and no less. */
export async function auditRollupSums(db: Kysely<Tables>, stream: string, findings: Findings): Promise<void> {
  for (const level of ["hour", "day"] as const) {
    const lengthMs = LENGTH_MS[level];
    const { rows } = await sql<{
      start_ms: number;
      slice: string;
      feature: string;
      events: number;
      panes: number;
    }>`
      SELECT long.start_ms, long.slice, long.feature, long.events, COALESCE(SUM(pane.events), 0) AS panes
      FROM rollup AS long
      LEFT JOIN rollup AS pane ON pane.stream = long.stream AND pane.level = 'pane' AND pane.slice = long.slice
        AND pane.feature = long.feature AND pane.start_ms >= long.start_ms AND pane.start_ms < long.start_ms + ${lengthMs}
      WHERE long.stream = ${stream} AND long.level = ${level}
      GROUP BY long.start_ms, long.slice, long.feature, long.events
      HAVING COALESCE(SUM(pane.events), 0) <> long.events
      ORDER BY long.start_ms LIMIT 500`.execute(db);
    for (const row of rows) {
      const where = `${level} ${new Date(row.start_ms).toISOString()}, ${row.slice}, ${row.feature}`;
      findings.add(2, where, `the rollup holds ${row.events} events, its panes hold ${Number(row.panes)}`);
    }
  }
}
