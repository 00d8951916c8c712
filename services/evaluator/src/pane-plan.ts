import type { PendingPane } from "@moorline/store";
import { paneStart } from "@moorline/windows";

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
 * Edges  A silence longer than the longest horizon is not walked through pane by pane: closing goes on one longest horizon before the next
 *        pane that has events, so that every window which holds an event is evaluated.
 */
export function panePlan(input: PanePlanInput): PanePlan {
  const { pending, paneMs, mostPanes } = input;
  const first = pending[0]?.paneStartMs;
  const closedThroughMs = input.closedThroughMs ?? first;
  if (closedThroughMs === undefined) return { closing: [], late: [], more: false };
  const late = pending.map((pane) => pane.paneStartMs).filter((start) => start < closedThroughMs);
  const next = pending.find((pane) => pane.paneStartMs >= closedThroughMs)?.paneStartMs;
  const endMs = input.nothingActive
    ? (pending.at(-1)?.paneStartMs ?? closedThroughMs - paneMs) + paneMs
    : paneStart(input.watermarkMs, paneMs);
  const startMs = afterSilence(closedThroughMs, next ?? endMs, input);
  const closing: number[] = [];
  for (let start = startMs; start + paneMs <= endMs && closing.length < mostPanes; start += paneMs)
    closing.push(start);
  return {
    closing,
    late: late.slice(0, mostPanes),
    more: closing.length === mostPanes || late.length > mostPanes,
  };
}

function afterSilence(
  closedThroughMs: number,
  nextMs: number,
  { longestHorizonMs, paneMs }: PanePlanInput,
): number {
  const resumeMs = paneStart(nextMs - longestHorizonMs, paneMs);
  const silentMs = nextMs - closedThroughMs;
  return silentMs > 2 * longestHorizonMs ? Math.max(closedThroughMs, resumeMs) : closedThroughMs;
}
