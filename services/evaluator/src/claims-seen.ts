import type { PartitionRow } from "@moorline/store";

/** When this process first saw each partition in the hands of its present owner. */
export class ClaimsSeen {
  readonly #seen = new Map<string, { readonly epoch: number; readonly atMs: number }>();

  /** The partitions whose claim was first seen less than `settleMs` ago: after a start of this process, all of them. */
  settling(partitions: readonly PartitionRow[], nowMs: number, settleMs: number): ReadonlySet<PartitionRow> {
    return new Set(partitions.filter((row) => nowMs - this.#seenAtMs(row, nowMs) < settleMs));
  }

  #seenAtMs({ topic, partition, epoch }: PartitionRow, nowMs: number): number {
    const key = JSON.stringify([topic, partition]);
    const seen = this.#seen.get(key);
    if (seen?.epoch === epoch) return seen.atMs;
    this.#seen.set(key, { epoch, atMs: nowMs });
    return nowMs;
  }
}
