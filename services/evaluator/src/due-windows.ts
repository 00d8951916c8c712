import type { HorizonConfig } from "@moorline/config";

export interface DueWindow {
  readonly horizon: string;
  readonly startMs: number;
  readonly endMs: number;
}

/** The windows that end exactly where a pane ends: disjoint windows, on multiples of their horizon's length. */
export function dueWindows(paneEndMs: number, horizons: readonly HorizonConfig[]): readonly DueWindow[] {
  return horizons
    .filter((horizon) => paneEndMs % horizon.ms === 0)
    .map((horizon) => ({ horizon: horizon.label, startMs: paneEndMs - horizon.ms, endMs: paneEndMs }));
}
