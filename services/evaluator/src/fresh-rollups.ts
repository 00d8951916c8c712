import type { RollupQuery, RollupRow, Store } from "@moorline/store";

/** What one feature and slice is asked for: the only way rollups are read while evaluating. */
export type SeriesQuery = RollupQuery & { readonly slice: string; readonly feature: string };

/** Rollups of the round at hand, not yet written, read in front of the store's. */
export class FreshRollups {
  /** By slice and feature. */
  readonly #series = new Map<string, Map<string, RollupRow>>();
  readonly #store: Store;

  constructor(store: Store) {
    this.#store = store;
  }

  add(row: RollupRow): void {
    const key = seriesKey(row.slice, row.feature);
    const series = this.#series.get(key) ?? new Map<string, RollupRow>();
    this.#series.set(key, series);
    series.set(timeKey(row), row);
  }

  rows(): readonly RollupRow[] {
    return [...this.#series.values()].flatMap((series) => [...series.values()]);
  }

  async read(query: SeriesQuery): Promise<readonly RollupRow[]> {
    const stored = await this.#store.panes.rollups(query);
    const fresh = [...(this.#series.get(seriesKey(query.slice, query.feature))?.values() ?? [])].filter(
      (row) => row.level === query.level && row.startMs >= query.fromMs && row.startMs < query.toMs,
    );
    if (fresh.length === 0) return stored;
    const replaced = new Set(fresh.map(timeKey));
    return [...stored.filter((row) => !replaced.has(timeKey(row))), ...fresh].toSorted(
      (a, b) => a.startMs - b.startMs,
    );
  }
}

function seriesKey(slice: string, feature: string): string {
  return JSON.stringify([slice, feature]);
}

function timeKey(row: Pick<RollupRow, "level" | "startMs">): string {
  return `${row.level} ${row.startMs}`;
}
