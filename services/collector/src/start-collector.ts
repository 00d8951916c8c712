import { hostname } from "node:os";
import type { MoorlineConfig, StreamConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { Store } from "@moorline/store";
import type { RunningService, Telemetry } from "@moorline/telemetry";
import type { CollectorReports } from "./collector-reports.js";
import { type DeadLetterSink, discardDeadLetters } from "./dead-letters.js";
import { DeadLetterFile } from "./files/dead-letter-file.js";
import { FileSource } from "./files/file-source.js";
import { DeadLetterTopic } from "./kafka/dead-letter-topic.js";
import { kafkaClient } from "./kafka/kafka-client.js";
import { KafkaSource } from "./kafka/kafka-source.js";
import type { Source } from "./source.js";
import { StreamCollector } from "./stream-collector.js";
import { TelemetryReports } from "./telemetry-reports.js";

export interface CollectorOptions {
  readonly config: MoorlineConfig;
  readonly store: Store;
  readonly telemetry: Telemetry;
  /** Streams to collect; absent means all of the config. */
  readonly streams?: readonly string[];
  /** Name of this collector in the store, unique among those that run; default host name and process id. */
  readonly instance?: string;
  /** The wall clock, for tests. */
  readonly nowMs?: () => number;
}

/**
 * Collects streams into the store until it is stopped or every stream's source is finished. Returns once the sources are started; what
 * is away then (broker, file, store) is tried again and shown in health.
 *
 * @throws MOORLINE_INPUT_COLLECTOR_STREAM when a named stream is not in the config
 */
export async function startCollector(options: CollectorOptions): Promise<RunningService> {
  const instance = options.instance ?? `${hostname()}-${process.pid}`;
  const collectors = chosenStreams(options).map((stream) => makeStreamCollector(stream, instance, options));
  const stopAll = () => Promise.all(collectors.map((collector) => collector.stop()));
  let stopped: Promise<void> | null = null;
  const ended = Promise.all(collectors.map((collector) => collector.ended)).then(() => {});
  ended.catch(() => {});

  const service: RunningService = {
    name: "collector",
    ended,
    stop: () => {
      stopped ??= stopAll().then(() => options.telemetry.logger.info("collector stopped"));
      return stopped;
    },
  };
  try {
    await Promise.all(collectors.map((collector) => collector.start()));
  } catch (error) {
    await service.stop();
    throw error;
  }
  return service;
}

function chosenStreams({ config, streams }: CollectorOptions): readonly StreamConfig[] {
  if (streams === undefined) return config.streams;
  return streams.map((name) => {
    const found = config.streams.find((stream) => stream.name === name);
    if (found !== undefined) return found;
    const known = config.streams.map((stream) => stream.name);
    throw new MoorlineError("MOORLINE_INPUT_COLLECTOR_STREAM", { stream: name, streams: known });
  });
}

function makeStreamCollector(
  stream: StreamConfig,
  instance: string,
  { config, store, telemetry, nowMs }: CollectorOptions,
): StreamCollector {
  const reports = new TelemetryReports(telemetry, stream.name);
  const { source, deadLetters } = makeSource(stream, instance, telemetry, reports);
  return new StreamCollector({
    stream,
    limits: config.collector,
    owner: instance,
    store,
    deadLetters,
    source,
    reports,
    nowMs: nowMs ?? Date.now,
  });
}

function makeSource(
  stream: StreamConfig,
  instance: string,
  telemetry: Telemetry,
  reports: CollectorReports,
): { source: Source; deadLetters: DeadLetterSink } {
  const config = stream.source;
  if (config.kind === "file") {
    const { deadLetterPath } = config;
    const deadLetters = deadLetterPath === null ? discardDeadLetters : new DeadLetterFile(deadLetterPath);
    return { source: new FileSource(config, reports), deadLetters };
  }
  const kafka = kafkaClient(config, instance, telemetry.logger.child({ stream: stream.name }));
  const { deadLetterTopic } = config;
  const deadLetters =
    deadLetterTopic === null ? discardDeadLetters : new DeadLetterTopic(kafka, deadLetterTopic);
  return { source: new KafkaSource(kafka, config, reports), deadLetters };
}
