import type { PartitionRow } from "@moorline/store";

export interface WatermarkInput {
  readonly partitions: readonly PartitionRow[];
  readonly latenessMs: number;
  readonly idleAfterMs: number;
  readonly nowMs: number;
}

/**
 * The event time up to which nothing on time can come any more.
 *
 * Definition  the least of the active partitions' greatest event times, less the lateness. A partition that is finished, halted, or without an
 *             event for `idleAfterMs` on the wall clock holds nothing back. When none is active, the greatest event time of all closes what is
 *             there, lateness and all: nobody is left to be late.
 * Edges       null while no event was counted. The caller keeps the greatest watermark it has seen: it never goes back.
 */
export function watermark(input: WatermarkInput): number | null {
  const seen = input.partitions.filter((partition) => partition.maxEventMs !== null);
  if (seen.length === 0) return null;
  const active = seen.filter(
    (partition) =>
      partition.status === "reading" &&
      partition.lastEventAtMs !== null &&
      input.nowMs - partition.lastEventAtMs <= input.idleAfterMs,
  );
  const times = (rows: readonly PartitionRow[]) => rows.map((row) => row.maxEventMs!);
  if (active.length > 0) return Math.min(...times(active)) - input.latenessMs;
  // Just after the last event's pane: the pane that holds it may close.
  return Math.max(...times(seen)) + 1;
}
