import type { AuditReport } from "./audit-report.js";

/**
 * The store: SQLite or PostgreSQL behind one interface. Times are epoch milliseconds, offsets are safe integers, every
 * method that writes does it in one transaction. Errors are MoorlineErrors of category UPSTREAM (retryable says so),
 * FORMAT for stored bytes that cannot be read, STATE for a missing baseline.
 */
export interface Store {
  readonly kind: "sqlite" | "postgres";
  /** Brings the schema to this version's; safe to call from several processes at once. */
  migrate(): Promise<void>;
  /** Resolves when the store answers; rejects with the reason when it does not. */
  ping(): Promise<void>;
  close(): Promise<void>;
  readonly ingest: IngestStore;
  readonly panes: PaneStore;
  readonly evaluations: EvaluationStore;
  readonly baselines: BaselineStore;
  readonly logbook: LogbookStore;
  /** Invariants 1 and 2 from the store alone; `stream` absent means every stream. */
  audit(stream?: string): Promise<AuditReport>;
}

export interface PartitionKey {
  readonly stream: string;
  /** Kafka topic, or the path of a file source as the config has it. */
  readonly topic: string;
  readonly partition: number;
}

// ---- ingest: partitions, owner epochs, segments -------------------------------------------------------------------

export interface IngestStore {
  /** Takes a partition: bumps its owner epoch; the older epoch can write nothing from here on. */
  claimPartition(claim: PartitionClaimRequest): Promise<PartitionClaim>;
  /** Writes one checkpoint and moves `nextOffset`, if epoch and `fromOffset` still match; else changes nothing. */
  commitCheckpoint(checkpoint: Checkpoint): Promise<CheckpointOutcome>;
  /** Sets a partition's status without moving its offset, with a logbook entry when it changes; fenced by epoch. */
  setPartitionStatus(
    key: PartitionKey,
    epoch: number,
    status: PartitionStatus,
    detail: string,
    atMs: number,
  ): Promise<boolean>;
  partitions(stream: string): Promise<readonly PartitionRow[]>;
  gaps(stream: string): Promise<readonly OffsetGap[]>;
}

export type PartitionStatus = "reading" | "log-rewound" | "halted" | "finished";

export interface PartitionClaimRequest extends PartitionKey {
  readonly owner: string;
  /** Where a partition that the store does not know yet starts. */
  readonly startOffset: number;
  /** Kafka cluster id, or a file's identity: kept at first claim, returned ever after. */
  readonly sourceId: string;
  readonly atMs: number;
}

export interface PartitionClaim {
  readonly epoch: number;
  readonly nextOffset: number;
  readonly sourceId: string;
  readonly status: PartitionStatus;
}

/** What one collector counted from offsets [fromOffset, toOffset) of one partition. */
export interface Checkpoint extends PartitionKey {
  readonly owner: string;
  readonly epoch: number;
  readonly fromOffset: number;
  readonly toOffset: number;
  /** Offsets in the range that were never to be had (retention, compaction is not a gap): recorded, logged, counted as a tile. */
  readonly gaps: readonly OffsetGap[];
  /** Events counted into segments. */
  readonly events: number;
  /** Of those, events of panes that had ended (by more than the lateness) before they came. */
  readonly lateEvents: number;
  /** Events that went to the dead letters, by reason. */
  readonly deadLetters: Readonly<Record<string, number>>;
  /** Greatest event time counted in the range, or null when there is none. */
  readonly maxEventMs: number | null;
  readonly segments: readonly SegmentWrite[];
  readonly atMs: number;
}

/** All features of one pane and slice, as encoded by `encodeSegmentBody`. */
export interface SegmentWrite {
  readonly paneStartMs: number;
  /** `all` or `key=value`. */
  readonly slice: string;
  readonly events: number;
  readonly body: Uint8Array;
}

export type CheckpointOutcome =
  | { readonly outcome: "committed" }
  | { readonly outcome: "fenced"; readonly epoch: number; readonly nextOffset: number };

export interface OffsetGap {
  readonly topic: string;
  readonly partition: number;
  readonly fromOffset: number;
  readonly toOffset: number;
  readonly reason: string;
}

export interface PartitionRow extends PartitionKey {
  readonly owner: string;
  readonly epoch: number;
  readonly startOffset: number;
  readonly nextOffset: number;
  readonly status: PartitionStatus;
  readonly sourceId: string;
  /** Greatest event time counted so far. */
  readonly maxEventMs: number | null;
  /** Wall clock of the last checkpoint that counted an event. */
  readonly lastEventAtMs: number | null;
  readonly updatedAtMs: number;
  /** Sums over all checkpoints. */
  readonly events: number;
  readonly lateEvents: number;
  readonly deadLetters: number;
}

// ---- panes: segments waiting, rollups ----------------------------------------------------------------------------

export interface PaneStore {
  /** Panes that have segments not yet in a rollup, oldest first. */
  pendingPanes(stream: string): Promise<readonly PendingPane[]>;
  /** The slices that a pane has segments of, `all` first. */
  segmentSlices(stream: string, paneStartMs: number): Promise<readonly string[]>;
  /** Every segment of a pane (of one slice, where that is named), in the one order that merges use: topic, partition, fromOffset, slice. */
  segments(stream: string, paneStartMs: number, slice?: string): Promise<readonly StoredSegment[]>;
  /** Rollups with fromMs <= startMs < toMs, ordered by startMs, slice, feature. */
  rollups(query: RollupQuery): Promise<readonly RollupRow[]>;
  /** Slices seen in rollups of the stream, `all` first, then by name. */
  slices(stream: string): Promise<readonly string[]>;
  /** First and last pane start that have a rollup. */
  extent(stream: string): Promise<{ readonly firstPaneMs: number; readonly lastPaneMs: number } | null>;
}

export interface PendingPane {
  readonly paneStartMs: number;
  readonly segments: number;
  /** True when the pane was rolled up before: what is pending came late. */
  readonly rolledUp: boolean;
}

export interface StoredSegment {
  readonly id: number;
  readonly slice: string;
  readonly topic: string;
  readonly partition: number;
  readonly fromOffset: number;
  readonly toOffset: number;
  readonly events: number;
  readonly body: Uint8Array;
}

export type RollupLevel = "pane" | "hour" | "day";

export interface RollupQuery {
  readonly stream: string;
  readonly level: RollupLevel;
  readonly fromMs: number;
  readonly toMs: number;
  readonly slice?: string;
  readonly feature?: string;
}

/** One feature and slice over one pane, hour or day; `body` is an encoded sketch. */
export interface RollupRow {
  readonly level: RollupLevel;
  readonly startMs: number;
  readonly slice: string;
  readonly feature: string;
  /** Values of every kind. */
  readonly events: number;
  readonly amended: boolean;
  readonly body: Uint8Array;
}

// ---- evaluations ---------------------------------------------------------------------------------------------------

export interface EvaluationStore {
  /** Makes `owner` the leader of `name` until now + ttl, or renews it; null while another one leads. */
  acquireLease(name: string, owner: string, nowMs: number, ttlMs: number): Promise<Lease | null>;
  releaseLease(lease: Lease): Promise<void>;
  progress(stream: string): Promise<StreamProgress | null>;
  states(stream: string): Promise<readonly FeatureStateRow[]>;
  /** Evaluations with fromMs < windowEndMs <= toMs, ordered by windowEndMs. */
  evaluations(query: EvaluationQuery): Promise<readonly EvaluationRow[]>;
  /** Everything that follows from closing panes, in one transaction, if the lease still holds. Writing the same again changes nothing. */
  commit(batch: EvaluationCommit): Promise<"committed" | "fenced">;
}

export interface Lease {
  readonly name: string;
  readonly owner: string;
  readonly token: number;
}

export interface StreamProgress {
  readonly watermarkMs: number;
  /** Every pane that ends at or before this is closed. */
  readonly closedThroughMs: number;
  /** Wall clock of the last evaluation round. */
  readonly evaluatedAtMs: number;
}

export interface EvaluationCommit {
  readonly stream: string;
  readonly lease: Lease;
  /** Null leaves it as it is, none where there is none. */
  readonly progress: StreamProgress | null;
  readonly rollups: readonly RollupRow[];
  /** Ids of segments that the rollups now contain: no longer pending. */
  readonly settledSegments: readonly number[];
  readonly evaluations: readonly EvaluationRow[];
  readonly states: readonly FeatureStateRow[];
  readonly logbook: readonly LogbookWrite[];
}

/** One (horizon, window, slice, feature) compared with one baseline. Key: stream, horizon, windowEndMs, baselineId, slice, feature. */
export interface EvaluationRow {
  readonly stream: string;
  readonly horizon: string;
  readonly windowStartMs: number;
  readonly windowEndMs: number;
  readonly baselineId: string;
  readonly slice: string;
  readonly feature: string;
  readonly state: FeatureState;
  readonly events: number;
  readonly amended: boolean;
  /** The comparison without its pairs (they are made again from rollups), JSON-serialisable. */
  readonly comparison: unknown;
  readonly evaluatedAtMs: number;
}

export type FeatureState = "holding" | "straining" | "adrift" | "thin" | "silent";

export interface EvaluationQuery {
  readonly stream: string;
  readonly fromMs: number;
  readonly toMs: number;
  readonly horizon?: string;
  readonly slice?: string;
  readonly feature?: string;
  readonly baselineId?: string;
}

/** Where a feature stands now on one horizon. Key: stream, horizon, slice, feature. */
export interface FeatureStateRow {
  readonly stream: string;
  readonly horizon: string;
  readonly slice: string;
  readonly feature: string;
  readonly state: FeatureState;
  readonly sinceMs: number;
  readonly windowEndMs: number;
  readonly baselineId: string | null;
  /** The decision's memory, JSON-serialisable. */
  readonly memory: unknown;
  /** The decision in words with its figures. */
  readonly sentence: string;
}

// ---- baselines -----------------------------------------------------------------------------------------------------

export interface BaselineStore {
  /** Writes a baseline; the same id again changes nothing and returns false. */
  put(baseline: BaselineRecord, parts: readonly BaselinePart[]): Promise<boolean>;
  /** Newest first. */
  list(stream: string): Promise<readonly BaselineRecord[]>;
  get(id: string): Promise<BaselineRecord | null>;
  parts(
    id: string,
    filter?: { readonly slice?: string; readonly feature?: string; readonly block?: number },
  ): Promise<readonly BaselinePart[]>;
  /** Makes a baseline the active one of its stream, with a logbook entry, in one transaction. */
  activate(stream: string, id: string, by: string, atMs: number): Promise<void>;
  active(stream: string): Promise<{ readonly baselineId: string; readonly sinceMs: number } | null>;
}

export interface BaselineRecord {
  /** Hash of the content. */
  readonly id: string;
  readonly stream: string;
  readonly createdAtMs: number;
  readonly createdBy: string;
  readonly note: string;
  /** Source, rows, columns, counts, thresholds by slice and feature, Moorline version: JSON-serialisable, defined by packages/baseline. */
  readonly manifest: unknown;
}

/** One feature and slice of a baseline: whole (`block` = -1) or one of its blocks (0, 1, …). */
export interface BaselinePart {
  readonly slice: string;
  readonly feature: string;
  readonly block: number;
  readonly body: Uint8Array;
}

// ---- logbook -------------------------------------------------------------------------------------------------------

export interface LogbookStore {
  append(entry: LogbookWrite): Promise<number>;
  /** Newest first; `beforeId` pages. */
  entries(query: LogbookQuery): Promise<readonly LogbookEntry[]>;
}

export type LogbookKind =
  | "state-change"
  | "baseline-set"
  | "baseline-activated"
  | "offset-gap"
  | "log-rewound"
  | "partition-status"
  | "pane-amended"
  | "stream-silent"
  | "stream-resumed"
  | "config-changed"
  | "started"
  | "stopped";

export interface LogbookWrite {
  readonly atMs: number;
  readonly stream: string | null;
  readonly kind: LogbookKind;
  /** What it is about, for example `cargo_temp` or `topic/3`. */
  readonly subject: string;
  /** One sentence. */
  readonly sentence: string;
  /** Figures, JSON-serialisable. */
  readonly detail: unknown;
}

export interface LogbookEntry extends LogbookWrite {
  readonly id: number;
}

export interface LogbookQuery {
  readonly stream?: string;
  readonly kind?: LogbookKind;
  readonly subject?: string;
  readonly fromMs?: number;
  readonly toMs?: number;
  readonly beforeId?: number;
  readonly limit: number;
}
