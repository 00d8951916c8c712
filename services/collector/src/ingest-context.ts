import type { CollectorConfig, StreamConfig } from "@moorline/config";
import type { Decoder } from "@moorline/decode";
import type { Checkpoint, CheckpointOutcome, PartitionKey } from "@moorline/store";
import type { DeadLetter } from "./dead-letters.js";
import type { RetryPlan } from "./retry-upstream.js";
import type { SketchOptionsSource } from "./sketch-options.js";
import type { SliceRegistry } from "./slice-registry.js";
import type { BatchControl, Verdict } from "./source.js";

/** What the partitions of one stream share. */
export interface IngestContext {
  readonly stream: StreamConfig;
  /** Name of this collector in the store. */
  readonly owner: string;
  readonly limits: CollectorConfig;
  readonly slices: SliceRegistry;
  readonly sketchOptions: SketchOptionsSource;
  readonly decoder: Decoder;
  nowMs(): number;
  /** Once for some events: what the decoder holds their times against. */
  lookAtClock(): void;
  isStopping(): boolean;
  /** True when all partitions hold more than the limit and one with this many bytes has more than its share. */
  overBudget(heldBytes: number): boolean;
  commitCheckpoint(checkpoint: Checkpoint): Promise<CheckpointOutcome>;
  sendDeadLetters(letters: readonly DeadLetter[]): Promise<void>;
  /** How to go on when store or dead letters are away: with heartbeats, until the partition is lost or the stop cannot wait. */
  retryPlan(key: PartitionKey, isReleased: () => boolean, control?: BatchControl): RetryPlan;
  checkpointed(checkpoint: Checkpoint, durationMs: number): void;
  noteGap(key: PartitionKey, fromOffset: number, toOffset: number): void;
  /** Marks the partition as rewound, in the store and in the log; the verdict halts it. */
  haltRewound(key: PartitionKey, epoch: number, reason: string): Promise<Verdict>;
}
