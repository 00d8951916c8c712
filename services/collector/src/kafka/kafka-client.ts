import type { KafkaSourceConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { Logger } from "@moorline/telemetry";
import { Kafka, type LogEntry, logLevel } from "kafkajs";
import { registerCodecs } from "./codecs.js";
import { patchRequestQueue } from "./request-queue-patch.js";

const CONNECTION_TIMEOUT_MS = 10_000;
const REQUEST_TIMEOUT_MS = 30_000;
/** Some seconds: then the supervisor says what is wrong and goes on trying. */
const RETRIES = 5;

/** A kafkajs client for one source, with the codecs and the patch that it needs, and its log in ours. */
export function kafkaClient(config: KafkaSourceConfig, owner: string, logger: Logger): Kafka {
  registerCodecs();
  patchRequestQueue();
  return new Kafka({
    clientId: `moorline-${owner}`,
    brokers: [...config.brokers],
    connectionTimeout: CONNECTION_TIMEOUT_MS,
    requestTimeout: REQUEST_TIMEOUT_MS,
    // Our supervisor makes a new consumer instead: a restarted one would lose its pending seeks.
    retry: {
      retries: RETRIES,
      initialRetryTime: 200,
      maxRetryTime: 5_000,
      restartOnFailure: async () => false,
    },
    logLevel: logLevel.WARN,
    logCreator: () => (entry) => relay(logger, entry),
  });
}

/** What kafkajs says, as the reason that a source is away. */
export function kafkaAway(config: KafkaSourceConfig, cause: unknown): MoorlineError {
  const reason = cause instanceof Error ? cause.message : String(cause);
  const details = { brokers: config.brokers, topics: config.topics, reason };
  return new MoorlineError("MOORLINE_UPSTREAM_KAFKA", details, { cause });
}

export function isKafkaError(error: unknown): boolean {
  return error instanceof Error && error.name.startsWith("KafkaJS");
}

/** kafkajs calls every rebalance an error; what ends a consumer comes to us as a crash, so its lines are details. */
function relay(logger: Logger, { namespace, level, log }: LogEntry): void {
  const { message, timestamp: _, logger: __, ...rest } = log;
  const line = `kafkajs ${namespace}: ${message}`;
  if (level === logLevel.ERROR || level === logLevel.WARN) logger.info(rest, line);
  else logger.debug(rest, line);
}
