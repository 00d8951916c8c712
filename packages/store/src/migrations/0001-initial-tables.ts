import { sql } from "kysely";
import type { Migration } from "./migration.js";

export const initialTables: Migration = async (transaction, types) => {
  const blob = sql.raw(types.blob);
  const id = sql.raw(types.id === "integer" ? "integer PRIMARY KEY AUTOINCREMENT" : "bigserial PRIMARY KEY");
  const statements = [
    sql`CREATE TABLE "partition" (
      stream text NOT NULL, topic text NOT NULL, "partition" bigint NOT NULL,
      owner text NOT NULL, epoch bigint NOT NULL, start_offset bigint NOT NULL, next_offset bigint NOT NULL,
      status text NOT NULL, source_id text NOT NULL, max_event_ms bigint, last_event_at_ms bigint, updated_at_ms bigint NOT NULL,
      events bigint NOT NULL, late_events bigint NOT NULL, dead_letters bigint NOT NULL,
      PRIMARY KEY (stream, topic, "partition"))`,
    sql`CREATE TABLE segment_set (
      id ${id}, stream text NOT NULL, topic text NOT NULL, "partition" bigint NOT NULL, epoch bigint NOT NULL,
      from_offset bigint NOT NULL, to_offset bigint NOT NULL, events bigint NOT NULL, late_events bigint NOT NULL,
      dead_letters text NOT NULL, dead_letter_events bigint NOT NULL, segment_count bigint NOT NULL, segment_checksum bigint NOT NULL,
      gap_count bigint NOT NULL, gap_offsets bigint NOT NULL, written_at_ms bigint NOT NULL,
      UNIQUE (stream, topic, "partition", from_offset))`,
    sql`CREATE TABLE offset_gap (
      id ${id}, set_id bigint NOT NULL REFERENCES segment_set (id), stream text NOT NULL, topic text NOT NULL,
      "partition" bigint NOT NULL, from_offset bigint NOT NULL, to_offset bigint NOT NULL, reason text NOT NULL, at_ms bigint NOT NULL)`,
    sql`CREATE TABLE segment (
      id ${id}, set_id bigint NOT NULL REFERENCES segment_set (id), stream text NOT NULL, pane_start_ms bigint NOT NULL,
      slice text NOT NULL, events bigint NOT NULL, body_crc bigint NOT NULL, body ${blob} NOT NULL)`,
    sql`CREATE INDEX offset_gap_by_set ON offset_gap (set_id)`,
    sql`CREATE INDEX segment_by_pane ON segment (stream, pane_start_ms)`,
    sql`CREATE INDEX segment_by_set ON segment (set_id)`,
    sql`CREATE TABLE segment_pending (
      segment_id bigint PRIMARY KEY, stream text NOT NULL, pane_start_ms bigint NOT NULL)`,
    sql`CREATE INDEX segment_pending_by_pane ON segment_pending (stream, pane_start_ms)`,
    sql`CREATE TABLE rollup (
      stream text NOT NULL, level text NOT NULL, start_ms bigint NOT NULL, slice text NOT NULL, feature text NOT NULL,
      events bigint NOT NULL, amended bigint NOT NULL, body ${blob} NOT NULL,
      PRIMARY KEY (stream, level, slice, feature, start_ms))`,
    sql`CREATE TABLE stream_slice (stream text NOT NULL, slice text NOT NULL, PRIMARY KEY (stream, slice))`,
    sql`CREATE INDEX rollup_by_time ON rollup (stream, level, start_ms, slice)`,
    sql`CREATE TABLE evaluation (
      stream text NOT NULL, horizon text NOT NULL, window_start_ms bigint NOT NULL, window_end_ms bigint NOT NULL,
      baseline_id text NOT NULL, slice text NOT NULL, feature text NOT NULL, state text NOT NULL, events bigint NOT NULL,
      amended bigint NOT NULL, comparison text NOT NULL, evaluated_at_ms bigint NOT NULL,
      PRIMARY KEY (stream, horizon, slice, feature, window_end_ms, baseline_id))`,
    sql`CREATE INDEX evaluation_by_time ON evaluation (stream, window_end_ms)`,
    sql`CREATE TABLE feature_state (
      stream text NOT NULL, horizon text NOT NULL, slice text NOT NULL, feature text NOT NULL, state text NOT NULL,
      since_ms bigint NOT NULL, window_end_ms bigint NOT NULL, baseline_id text, memory text NOT NULL, sentence text NOT NULL,
      PRIMARY KEY (stream, horizon, slice, feature))`,
    sql`CREATE TABLE stream_progress (
      stream text PRIMARY KEY, watermark_ms bigint NOT NULL, closed_through_ms bigint NOT NULL, evaluated_at_ms bigint NOT NULL)`,
    sql`CREATE TABLE lease (
      name text PRIMARY KEY, owner text NOT NULL, token bigint NOT NULL, expires_at_ms bigint NOT NULL)`,
    sql`CREATE TABLE baseline (
      id text PRIMARY KEY, stream text NOT NULL, created_at_ms bigint NOT NULL, created_by text NOT NULL, note text NOT NULL,
      manifest text NOT NULL)`,
    sql`CREATE INDEX baseline_by_stream ON baseline (stream, created_at_ms)`,
    sql`CREATE TABLE baseline_part (
      baseline_id text NOT NULL REFERENCES baseline (id), slice text NOT NULL, feature text NOT NULL, block bigint NOT NULL,
      body ${blob} NOT NULL, PRIMARY KEY (baseline_id, slice, feature, block))`,
    sql`CREATE TABLE active_baseline (
      stream text PRIMARY KEY, baseline_id text NOT NULL REFERENCES baseline (id), since_ms bigint NOT NULL)`,
    sql`CREATE TABLE logbook (
      id ${id}, at_ms bigint NOT NULL, stream text, kind text NOT NULL, subject text NOT NULL, sentence text NOT NULL,
      detail text NOT NULL, once_key text UNIQUE)`,
    sql`CREATE INDEX logbook_by_stream ON logbook (stream, id)`,
  ];
  for (const statement of statements) await statement.execute(transaction);
};
