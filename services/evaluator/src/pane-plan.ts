import type { PendingPane } from "@moorline/store";
import { DAY_MS, paneStart } from "@moorline/windows";

export interface PanePlanInput {
  readonly pending: readonly PendingPane[];
  /** Null before the stream's first pane was closed. */
  readonly closedThroughMs: number | null;
  readonly watermarkMs: number;
  readonly paneMs: number;
  readonly longestHorizonMs: number;
  /** True when no partition is active: the pane that holds the last event may close though it is not over. */
  readonly nothingActive: boolean;
  readonly mostPanes: number;
}

export interface PanePlan {
  /** Pane starts to close now, ascending, without gaps: an empty pane closes too. */
  readonly closing: readonly number[];
  /** Panes that were closed before and have new segments, ascending. */
  readonly late: readonly number[];
  /** True when more could have been closed: do not wait for the next tick. */
  readonly more: boolean;
}

/**
 * Which panes to close and which to amend.
 *
 * Edges  A silence of more than two longest horizons is not walked through to its end: closing goes on to the end of the day that it began in,
 *        so that its hours and the day get their rollups, and from there one longest horizon before the next pane that has events, so that every
 *        window which holds an event is evaluated. Panes that were made longer by the config go on at the next whole one.
 */
export function panePlan(input: PanePlanInput): PanePlan {
  const { pending, paneMs, mostPanes } = input;
  const first = pending[0]?.paneStartMs;
  const reachedMs = input.closedThroughMs ?? first;
  if (reachedMs === undefined) return { closing: [], late: [], more: false };
  const closedThroughMs = Math.ceil(reachedMs / paneMs) * paneMs;
  const late = pending.map((pane) => pane.paneStartMs).filter((start) => start < closedThroughMs);
  const { startMs, endMs } = closingRange(input, closedThroughMs);
  const closing: number[] = [];
  for (let start = startMs; start + paneMs <= endMs && closing.length < mostPanes; start += paneMs) {
    closing.push(start);
  }
  const stopped = closing.length > 0 && closing.at(-1)! + paneMs < lastEnd(input, closedThroughMs);
  return { closing, late: late.slice(0, mostPanes), more: stopped || late.length > mostPanes };
}

/** The end of the last pane that may close now. */
function lastEnd(
  { pending, nothingActive, watermarkMs, paneMs }: PanePlanInput,
  closedThroughMs: number,
): number {
  if (!nothingActive) return paneStart(watermarkMs, paneMs);
  return (pending.at(-1)?.paneStartMs ?? closedThroughMs - paneMs) + paneMs;
}

function closingRange(
  input: PanePlanInput,
  closedThroughMs: number,
): { readonly startMs: number; readonly endMs: number } {
  const { pending, longestHorizonMs, paneMs } = input;
  const endMs = lastEnd(input, closedThroughMs);
  const nextMs = pending.find((pane) => pane.paneStartMs >= closedThroughMs)?.paneStartMs ?? endMs;
  if (nextMs - closedThroughMs <= 2 * longestHorizonMs) return { startMs: closedThroughMs, endMs };
  const dayEndMs = Math.ceil(closedThroughMs / DAY_MS) * DAY_MS;
  if (closedThroughMs < dayEndMs) return { startMs: closedThroughMs, endMs: Math.min(endMs, dayEndMs) };
  return { startMs: Math.max(closedThroughMs, paneStart(nextMs - longestHorizonMs, paneMs)), endMs };
}
