import type { StreamConfig } from "@moorline/config";
import type { FeatureStateRow, LogbookWrite, PartitionRow } from "@moorline/store";

export interface SilenceInput {
  readonly stream: StreamConfig;
  readonly partitions: readonly PartitionRow[];
  /** Wall clock at which this evaluator started: what a feed that never spoke is measured from. */
  readonly startedMs: number;
  readonly nowMs: number;
  readonly states: readonly FeatureStateRow[];
  readonly slices: readonly string[];
}

export interface SilenceChange {
  readonly states: readonly FeatureStateRow[];
  readonly logbook: readonly LogbookWrite[];
}

/**
 * The change to `silent` of a whole stream and the first sign of life after it; null while nothing changes.
 *
 * Edges  A finished source is not silent: it said all it had. A feature leaves `silent` with its next evaluated window, with the memory that it had;
 *        the logbook's `stream-resumed` comes as soon as an event was counted.
 */
export function silenceChange(input: SilenceInput): SilenceChange | null {
  const { partitions, stream, nowMs } = input;
  if (partitions.length > 0 && partitions.every((row) => row.status === "finished")) return null;
  const lastEventAtMs = partitions.reduce((last, row) => Math.max(last, row.lastEventAtMs ?? 0), 0);
  const silentForMs = nowMs - (lastEventAtMs || input.startedMs);
  const silent = input.states.filter((row) => row.state === "silent");
  if (silentForMs > stream.silentAfterMs)
    return silent.length > 0 ? null : fallSilent(input, silentForMs, lastEventAtMs);
  if (silent.length === 0 || lastEventAtMs === 0) return null;
  return silent.some((row) => row.sinceMs < lastEventAtMs) ? resume(input, silent, lastEventAtMs) : null;
}

function fallSilent(input: SilenceInput, silentForMs: number, lastEventAtMs: number): SilenceChange {
  const { stream, nowMs } = input;
  const known = new Map(input.states.map((row) => [seriesOf(row), row]));
  const minutes = Math.round(silentForMs / 60_000);
  const sentence = `no event of the stream for ${minutes} minutes`;
  const states = stream.horizons.flatMap((horizon) =>
    input.slices.flatMap((slice) =>
      stream.features.map(({ name: feature }): FeatureStateRow => {
        const place = { stream: stream.name, horizon: horizon.label, slice, feature };
        const before = known.get(seriesOf(place));
        return {
          ...place,
          state: "silent",
          sinceMs: nowMs,
          windowEndMs: before?.windowEndMs ?? 0,
          baselineId: before?.baselineId ?? null,
          memory: before?.memory ?? null,
          sentence,
        };
      }),
    ),
  );
  const entry: LogbookWrite = {
    atMs: nowMs,
    stream: stream.name,
    kind: "stream-silent",
    subject: stream.name,
    sentence: `${stream.name} is silent: ${sentence}`,
    detail: { lastEventAtMs: lastEventAtMs || null, silentAfterMs: stream.silentAfterMs, atMs: nowMs },
  };
  return { states, logbook: [entry] };
}

/** The states stay `silent` until a window was evaluated; that they know of the first event is kept in their sentence's time. */
function resume(
  input: SilenceInput,
  silent: readonly FeatureStateRow[],
  lastEventAtMs: number,
): SilenceChange {
  const { stream, nowMs } = input;
  const states = silent.map((row) => ({
    ...row,
    sinceMs: nowMs,
    sentence: "events come again; no window was evaluated yet",
  }));
  const entry: LogbookWrite = {
    atMs: nowMs,
    stream: stream.name,
    kind: "stream-resumed",
    subject: stream.name,
    sentence: `events of ${stream.name} come again`,
    detail: { lastEventAtMs, atMs: nowMs },
  };
  return { states, logbook: [entry] };
}

function seriesOf({
  horizon,
  slice,
  feature,
}: Pick<FeatureStateRow, "horizon" | "slice" | "feature">): string {
  return JSON.stringify([horizon, slice, feature]);
}
