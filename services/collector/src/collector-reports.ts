import type { Checkpoint, PartitionKey } from "@moorline/store";

/** What an outside system is called in health and log. */
export type OutsideSystem = "store" | "dead-letters" | "source";

/** What one stream's collector tells: log lines with a hint, metrics, readiness. */
export interface CollectorReports {
  opened(key: PartitionKey, epoch: number, nextOffset: number): void;
  checkpointed(checkpoint: Checkpoint, durationMs: number): void;
  lag(key: PartitionKey, lagMessages: number): void;
  gap(key: PartitionKey, fromOffset: number, toOffset: number): void;
  halted(key: PartitionKey, reason: string): void;
  fenced(key: PartitionKey, epoch: number): void;
  /** Ownership changed hands: what was not yet written will be read again. */
  rejoined(): void;
  sliceLimitReached(key: string, limit: number): void;
  baselineChanged(baselineId: string | null): void;
  /** An outside system does not answer: readiness turns red with the reason until `back` is called. */
  away(system: OutsideSystem, error: unknown, attempt: number, waitMs: number): void;
  back(system: OutsideSystem): void;
}
