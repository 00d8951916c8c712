import type { CategoryCounts } from "@moorline/stats";
import type { DuckdbSession } from "./duckdb-session.js";

/** Most categories that are kept of a column, the most frequent first: an id column must not fill the memory. */
export const MOST_FILE_CATEGORIES = 100_000;

/** The categories of a column of the rows table with their counts, over the rows that a condition holds for. */
export async function readCategoryCounts(
  session: DuckdbSession,
  column: string,
  condition: string,
): Promise<CategoryCounts> {
  const [[events, present]] = (await session.rows(
    `select cast(count(*) as double), cast(count(${column}) as double) from rows where ${condition}`,
  )) as [[number, number]];
  const found = (await session.rows(
    `select ${column}, cast(count(*) as double) as n from rows where ${condition} and ${column} is not null ` +
      `group by 1 order by n desc, 1 limit ${MOST_FILE_CATEGORIES}`,
  )) as [string, number][];
  const kept = found.reduce((sum, [, count]) => sum + count, 0);
  return { events, missing: events - present, counts: new Map(found), other: present - kept };
}
