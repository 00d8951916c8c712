import type { RollupLevel } from "@moorline/store";

export const HOUR_MS = 3_600_000;
export const DAY_MS = 86_400_000;

/** A run of rollups of one level: every start from `fromMs` up to, not including, `toMs`. */
export interface CoverRun {
  readonly level: RollupLevel;
  readonly fromMs: number;
  readonly toMs: number;
}

export interface CoverInput {
  /** Aligned to panes. */
  readonly fromMs: number;
  readonly toMs: number;
  readonly paneMs: number;
  /** Hours and days that end at or before this have their rollup; later ones are read from panes. */
  readonly closedThroughMs: number;
}

/**
 * The fewest rollups that cover a range exactly: whole days (UTC) where they are closed, whole hours beside them, panes at the edges.
 *
 * Edges  an empty or reversed range has no runs; panes that do not divide an hour have no hour or day rollups, so panes cover all.
 * Cost   at most five runs, whatever the range.
 */
export function coverRange(input: CoverInput): readonly CoverRun[] {
  const { fromMs, toMs, paneMs, closedThroughMs } = input;
  if (toMs <= fromMs) return [];
  if (!hasLongRollups(paneMs)) return [{ level: "pane", fromMs, toMs }];
  const closedToMs = Math.min(toMs, closedThroughMs);
  return split(fromMs, toMs, closedToMs, HOUR_MS, "pane", (hoursFrom, hoursTo) =>
    split(hoursFrom, hoursTo, closedToMs, DAY_MS, "hour", (daysFrom, daysTo) => [
      { level: "day", fromMs: daysFrom, toMs: daysTo },
    ]),
  );
}

/** True where panes fill an hour exactly, so that an hour is the sum of its panes. */
export function hasLongRollups(paneMs: number): boolean {
  return paneMs < HOUR_MS && HOUR_MS % paneMs === 0;
}

/** The middle that is whole in `unitMs` and closed goes to `inner`, what is left at the edges is covered at `edge` level. */
function split(
  fromMs: number,
  toMs: number,
  closedToMs: number,
  unitMs: number,
  edge: RollupLevel,
  inner: (fromMs: number, toMs: number) => readonly CoverRun[],
): readonly CoverRun[] {
  const first = Math.ceil(fromMs / unitMs) * unitMs;
  const last = Math.floor(closedToMs / unitMs) * unitMs;
  if (last <= first) return [{ level: edge, fromMs, toMs }];
  const runs: CoverRun[] = [];
  if (fromMs < first) runs.push({ level: edge, fromMs, toMs: first });
  runs.push(...inner(first, last));
  if (last < toMs) runs.push({ level: edge, fromMs: last, toMs });
  return runs;
}
