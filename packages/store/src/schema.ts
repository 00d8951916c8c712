import type { Generated } from "kysely";

/** The tables as Kysely sees them: snake case, times in epoch milliseconds, truth as 0 or 1, JSON as text. */
export interface Tables {
  partition: PartitionTable;
  segment_set: SegmentSetTable;
  offset_gap: OffsetGapTable;
  segment: SegmentTable;
  segment_pending: SegmentPendingTable;
  rollup: RollupTable;
  stream_slice: StreamSliceTable;
  evaluation: EvaluationTable;
  feature_state: FeatureStateTable;
  stream_progress: StreamProgressTable;
  lease: LeaseTable;
  baseline: BaselineTable;
  baseline_part: BaselinePartTable;
  active_baseline: ActiveBaselineTable;
  logbook: LogbookTable;
}

export interface PartitionTable {
  stream: string;
  topic: string;
  partition: number;
  owner: string;
  epoch: number;
  start_offset: number;
  next_offset: number;
  status: string;
  source_id: string;
  max_event_ms: number | null;
  last_event_at_ms: number | null;
  updated_at_ms: number;
  events: number;
  late_events: number;
  dead_letters: number;
}

export interface SegmentSetTable {
  id: Generated<number>;
  stream: string;
  topic: string;
  partition: number;
  epoch: number;
  from_offset: number;
  to_offset: number;
  events: number;
  late_events: number;
  /** Reasons and counts, JSON. */
  dead_letters: string;
  dead_letter_events: number;
  /** How many segments were written with the set, and the sum of their checksums: a missing or altered one is found. */
  segment_count: number;
  segment_checksum: number;
  /** How many gaps lie in the range, and how many offsets they hold. */
  gap_count: number;
  gap_offsets: number;
  written_at_ms: number;
}

export interface OffsetGapTable {
  id: Generated<number>;
  set_id: number;
  stream: string;
  topic: string;
  partition: number;
  from_offset: number;
  to_offset: number;
  reason: string;
  at_ms: number;
}

export interface SegmentTable {
  id: Generated<number>;
  set_id: number;
  stream: string;
  pane_start_ms: number;
  slice: string;
  events: number;
  /** What `bodyChecksum` says of the body. */
  body_crc: number;
  body: Uint8Array;
}

export interface SegmentPendingTable {
  segment_id: number;
  stream: string;
  pane_start_ms: number;
}

export interface RollupTable {
  stream: string;
  level: string;
  start_ms: number;
  slice: string;
  feature: string;
  events: number;
  amended: number;
  body: Uint8Array;
}

/** The slices that have rollups: finding them in the rollups themselves would read them all. */
export interface StreamSliceTable {
  stream: string;
  slice: string;
}

export interface EvaluationTable {
  stream: string;
  horizon: string;
  window_start_ms: number;
  window_end_ms: number;
  baseline_id: string;
  slice: string;
  feature: string;
  state: string;
  events: number;
  amended: number;
  comparison: string;
  evaluated_at_ms: number;
}

export interface FeatureStateTable {
  stream: string;
  horizon: string;
  slice: string;
  feature: string;
  state: string;
  since_ms: number;
  window_end_ms: number;
  baseline_id: string | null;
  memory: string;
  sentence: string;
}

export interface StreamProgressTable {
  stream: string;
  watermark_ms: number;
  closed_through_ms: number;
  evaluated_at_ms: number;
}

export interface LeaseTable {
  name: string;
  owner: string;
  token: number;
  expires_at_ms: number;
}

export interface BaselineTable {
  id: string;
  stream: string;
  created_at_ms: number;
  created_by: string;
  note: string;
  manifest: string;
}

export interface BaselinePartTable {
  baseline_id: string;
  slice: string;
  feature: string;
  block: number;
  body: Uint8Array;
}

export interface ActiveBaselineTable {
  stream: string;
  baseline_id: string;
  since_ms: number;
}

export interface LogbookTable {
  id: Generated<number>;
  at_ms: number;
  stream: string | null;
  kind: string;
  subject: string;
  sentence: string;
  detail: string;
  /** Set where the same entry may be written again: the second time changes nothing. */
  once_key: string | null;
}
