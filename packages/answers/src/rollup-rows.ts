import type { RollupQuery, RollupRow, Store } from "@moorline/store";
import type { RollupReader } from "@moorline/windows";

const LEVELS = ["pane", "hour", "day"] as const;

/** The rollups of one feature and slice over a range, read once: many windows are merged from them. */
export async function rollupRows(
  store: Store,
  series: Pick<RollupQuery, "stream" | "fromMs" | "toMs"> & {
    readonly slice: string;
    readonly feature: string;
  },
): Promise<RollupReader> {
  const byLevel = new Map<RollupQuery["level"], readonly RollupRow[]>();
  for (const level of LEVELS) byLevel.set(level, await store.panes.rollups({ ...series, level }));
  return async ({ level, fromMs, toMs }) => {
    const rows = byLevel.get(level)!;
    return rows.slice(firstFrom(rows, fromMs), firstFrom(rows, toMs));
  };
}

/** Index of the first row that starts at `ms` or later; rows stand in the order of time. */
function firstFrom(rows: readonly RollupRow[], ms: number): number {
  let low = 0;
  let high = rows.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (rows[middle]!.startMs < ms) low = middle + 1;
    else high = middle;
  }
  return low;
}
