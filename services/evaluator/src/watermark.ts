import type { PartitionRow } from "@moorline/store";

export interface WatermarkInput {
  readonly partitions: readonly PartitionRow[];
  /** Of those, the ones that a collector took a moment ago: what waits in them may not have been read yet. */
  readonly settling: ReadonlySet<PartitionRow>;
  readonly latenessMs: number;
  readonly idleAfterMs: number;
  readonly nowMs: number;
}

export interface Watermark {
  /** Null while nothing can be told: no event was counted, or a settling partition never had one. */
  readonly watermarkMs: number | null;
  /** True when no partition is active: the pane that holds the last event may close though it is not over. */
  readonly nothingActive: boolean;
}

/**
 * The event time up to which nothing on time can come any more.
 *
 * Definition  the least of the active partitions' greatest event times, less the lateness. A partition that is finished, halted, or without an
 *             event for `idleAfterMs` on the wall clock holds nothing back, unless it is settling: after a start or a rebalance one partition's backlog
 *             must not make another's late. When none is active, the greatest event time of all closes what is there, lateness and all: nobody is
 *             left to be late.
 * Edges       the caller keeps the greatest watermark it has seen: it never goes back.
 */
export function watermark(input: WatermarkInput): Watermark {
  const active = input.partitions.filter((partition) => isActive(partition, input));
  if (active.length > 0) {
    const times = active.map((row) => row.maxEventMs);
    if (times.includes(null)) return { watermarkMs: null, nothingActive: false };
    return { watermarkMs: Math.min(...(times as number[])) - input.latenessMs, nothingActive: false };
  }
  const seen = input.partitions.flatMap((row) => (row.maxEventMs === null ? [] : [row.maxEventMs]));
  // Just after the last event's pane: the pane that holds it may close.
  return { watermarkMs: seen.length === 0 ? null : Math.max(...seen) + 1, nothingActive: true };
}

function isActive(
  partition: PartitionRow,
  { settling, nowMs, idleAfterMs }: Pick<WatermarkInput, "settling" | "nowMs" | "idleAfterMs">,
): boolean {
  if (partition.status !== "reading") return false;
  if (settling.has(partition)) return true;
  return partition.lastEventAtMs !== null && nowMs - partition.lastEventAtMs <= idleAfterMs;
}
