import type { StreamConfig } from "@moorline/config";
import type { DecisionMemory } from "@moorline/stats";
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
 * The change to `silent` of a whole stream and the first sign of life after it; null while nothing changes. The one way into `silent` and out of it.
 *
 * Edges  A finished source is not silent: it said all it had. After a start the feed has `silentAfter` to speak before it is called silent, and one
 *        that was silent before stays so until it speaks. Series that came up since (a new slice) become silent without another logbook entry.
 */
export function silenceChange(input: SilenceInput): SilenceChange | null {
  const { partitions, stream, nowMs } = input;
  if (partitions.length > 0 && partitions.every((row) => row.status === "finished")) return null;
  const lastEventAtMs = partitions.reduce((last, row) => Math.max(last, row.lastEventAtMs ?? 0), 0);
  const silent = input.states.filter((row) => row.state === "silent");
  if (nowMs - Math.max(lastEventAtMs, input.startedMs) > stream.silentAfterMs) {
    const series = stream.horizons.length * stream.features.length * input.slices.length;
    return silent.length < series ? fallSilent(input, silent.length === 0, lastEventAtMs) : null;
  }
  const speaks = nowMs - lastEventAtMs <= stream.silentAfterMs;
  return silent.length > 0 && speaks ? resume(input, silent, lastEventAtMs) : null;
}

function fallSilent(input: SilenceInput, first: boolean, lastEventAtMs: number): SilenceChange {
  const { stream, nowMs } = input;
  const known = new Map(input.states.map((row) => [seriesOf(row), row]));
  const sinceMs = lastEventAtMs || input.startedMs;
  const sentence = `no event of the stream since ${new Date(sinceMs).toISOString()}`;
  const states = stream.horizons.flatMap((horizon) =>
    input.slices.flatMap((slice) =>
      stream.features.map(({ name: feature }): FeatureStateRow => {
        const place = { stream: stream.name, horizon: horizon.label, slice, feature };
        const before = known.get(seriesOf(place));
        if (before?.state === "silent") return before;
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
  return { states, logbook: first ? [entry] : [] };
}

/** Until its next window a feature that was adrift still is, for nothing has shown the contrary; of the others nothing can be told. */
function resume(
  input: SilenceInput,
  silent: readonly FeatureStateRow[],
  lastEventAtMs: number,
): SilenceChange {
  const { stream, nowMs } = input;
  const states = silent.map((row): FeatureStateRow => {
    const memory = row.memory as DecisionMemory | null;
    const sentence = "events come again; no window was evaluated yet";
    if (memory?.state !== "adrift")
      return { ...row, state: "thin", sinceMs: row.windowEndMs || nowMs, sentence };
    const sinceMs = memory.sinceMs ?? row.windowEndMs;
    return { ...row, state: "adrift", sinceMs, sentence: `adrift before the silence; ${sentence}` };
  });
  const entry: LogbookWrite = {
    atMs: nowMs,
    stream: stream.name,
    kind: "stream-resumed",
    subject: stream.name,
    sentence: `events of ${stream.name} come again`,
    detail: {
      lastEventAtMs,
      atMs: nowMs,
      stillAdrift: states.filter((row) => row.state === "adrift").length,
    },
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
