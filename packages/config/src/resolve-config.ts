import { resolve } from "node:path";
import { parseDuration } from "./duration.js";
import type {
  FeatureConfig,
  MoorlineConfig,
  SliceKeyConfig,
  SourceConfig,
  StoreConfig,
  StreamConfig,
} from "./moorline-config.js";
import { parsePath } from "./path-segments.js";
import type { ConfigInput, StreamInput } from "./schema.js";

/** The checked config with every text made what it means. Relative paths are taken from `folder`. */
export function resolveConfig(input: ConfigInput, folder: string): MoorlineConfig {
  const { gateway, collector, evaluator } = input;
  return {
    store: resolveStore(input.store, folder),
    gateway: {
      host: gateway.host,
      port: gateway.port,
      publicUrl: (gateway.publicUrl ?? `http://localhost:${gateway.port}`).replace(/\/+$/, ""),
    },
    collector: {
      host: collector.host,
      port: collector.port,
      checkpointMs: msOf(collector.checkpoint),
      checkpointEvents: collector.checkpointEvents,
      checkpointBytes: collector.checkpointBytes,
    },
    evaluator: { host: evaluator.host, port: evaluator.port, tickMs: msOf(evaluator.tick) },
    streams: input.streams.map((stream) => resolveStream(stream, folder)),
  };
}

function resolveStore(store: string, folder: string): StoreConfig {
  const sqlite = /^sqlite:(?:\/\/(?=\/))?(.+)$/.exec(store);
  if (sqlite === null) return { kind: "postgres", url: store };
  return { kind: "sqlite", path: resolve(folder, sqlite[1]!) };
}

function resolveStream(stream: StreamInput, folder: string): StreamConfig {
  const { eventTime, format, eventTimeUnit } = stream.payload;
  return {
    name: stream.name,
    source: resolveSource(stream, folder),
    payload: { format, eventTime: eventTime === undefined ? null : segmentsOf(eventTime), eventTimeUnit },
    slices: stream.slices.map(resolveSlice),
    sliceLimit: stream.sliceLimit,
    features: stream.features.map(resolveFeature),
    paneMs: msOf(stream.pane),
    horizons: stream.horizons.map((label) => ({ label, ms: msOf(label) })).sort((a, b) => a.ms - b.ms),
    latenessMs: msOf(stream.lateness),
    idleAfterMs: msOf(stream.idleAfter),
    silentAfterMs: msOf(stream.silentAfter),
    maxAheadMs: msOf(stream.maxAhead),
    maxAgeMs: stream.maxAge === null ? null : msOf(stream.maxAge),
    decision: stream.decision,
  };
}

function resolveSource({ source }: StreamInput, folder: string): SourceConfig {
  if (source.kafka !== undefined) {
    const { brokers, topics, group, start, sessionTimeout, deadLetterTopic } = source.kafka;
    return {
      kind: "kafka",
      brokers,
      topics,
      group,
      deadLetterTopic: deadLetterTopic === undefined ? `${topics[0]}.dead-letters` : deadLetterTopic,
      start,
      sessionTimeoutMs: msOf(sessionTimeout),
    };
  }
  const { paths, follow, deadLetters } = source.file!;
  return {
    kind: "file",
    paths: paths.map((path) => resolve(folder, path)),
    names: paths,
    follow,
    deadLetterPath: deadLetters === null ? null : resolve(folder, deadLetters),
  };
}

function resolveSlice(slice: StreamInput["slices"][number]): SliceKeyConfig {
  if (typeof slice === "string") return { key: slice, path: segmentsOf(slice) };
  return { key: slice.key, path: segmentsOf(slice.path ?? [slice.key]) };
}

function resolveFeature(feature: StreamInput["features"][number]): FeatureConfig {
  const { name, unit, kind } = feature;
  return { name, kind, path: segmentsOf(feature.path ?? [name]), unit };
}

/** The schema and the cross-field rules have checked both before. */
function msOf(duration: string): number {
  return parseDuration(duration)!;
}

function segmentsOf(path: string | readonly string[]): readonly string[] {
  return parsePath(path)!;
}
