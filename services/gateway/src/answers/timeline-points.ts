import type { Store } from "@moorline/store";
import { isoTime, storedFigures } from "./feature-rows.js";

export interface TimelineRange {
  readonly stream: string;
  readonly feature: string;
  readonly slice: string;
  readonly fromMs: number;
  readonly toMs: number;
}

/** The evaluations of one feature and slice over a range, as points in time. */
export async function timelinePoints(store: Store, range: TimelineRange, horizon: string | undefined) {
  const rows = await store.evaluations.evaluations({
    ...range,
    ...(horizon === undefined ? {} : { horizon }),
  });
  return rows.map((row) => ({
    horizon: row.horizon,
    window: { from: isoTime(row.windowStartMs), to: isoTime(row.windowEndMs) },
    baselineId: row.baselineId,
    state: row.state,
    events: row.events,
    amended: row.amended,
    ...storedFigures(row),
  }));
}
