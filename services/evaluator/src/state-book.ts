import type { FeatureStateRow, LogbookWrite } from "@moorline/store";

type SeriesKey = Pick<FeatureStateRow, "horizon" | "slice" | "feature">;

/** Where each feature of a stream stands on each horizon, as last written to the store. */
export class StateBook {
  readonly #rows = new Map<string, FeatureStateRow>();

  constructor(rows: readonly FeatureStateRow[]) {
    for (const row of rows) this.#rows.set(keyOf(row), row);
  }

  get(key: SeriesKey): FeatureStateRow | undefined {
    return this.#rows.get(keyOf(key));
  }

  set(row: FeatureStateRow): void {
    this.#rows.set(keyOf(row), row);
  }

  all(): readonly FeatureStateRow[] {
    return [...this.#rows.values()];
  }
}

/** The logbook entry of a change, or null where nothing changed. A first state is an entry only when it says that something is wrong. */
export function stateChange(
  before: FeatureStateRow | undefined,
  after: FeatureStateRow,
  atMs: number,
  figures: Readonly<Record<string, unknown>>,
): LogbookWrite | null {
  const from = before?.state ?? null;
  if (from === after.state) return null;
  if (from === null && (after.state === "holding" || after.state === "thin")) return null;
  return {
    atMs,
    stream: after.stream,
    kind: "state-change",
    subject: after.feature,
    sentence: `${after.feature} (${after.slice}, ${after.horizon}) is ${after.state}: ${after.sentence}`,
    detail: {
      feature: after.feature,
      slice: after.slice,
      horizon: after.horizon,
      from,
      to: after.state,
      windowEndMs: after.windowEndMs,
      sinceMs: after.sinceMs,
      baselineId: after.baselineId,
      ...figures,
    },
  };
}

function keyOf({ horizon, slice, feature }: SeriesKey): string {
  return JSON.stringify([horizon, slice, feature]);
}
