import { access, constants } from "node:fs/promises";
import type { FileSourceConfig, KafkaSourceConfig, MoorlineConfig } from "@moorline/config";
import { isMoorlineError } from "@moorline/errors";
import { Kafka, logLevel } from "kafkajs";

/** `note`: nothing is broken, but something is still to be done. */
export interface CheckResult {
  readonly outcome: "ok" | "note" | "fail";
  readonly subject: string;
  readonly sentence: string;
}

/** Reaches everything that the config names, one thing after the other. Changes nothing but the store's schema, if that is older. */
export async function* runChecks(config: MoorlineConfig): AsyncGenerator<CheckResult> {
  yield* checkStore(config);
  for (const { name, source } of config.streams) {
    if (source.kind === "kafka") yield* checkKafka(name, source);
    else yield* checkFiles(name, source);
  }
}

async function* checkStore(config: MoorlineConfig): AsyncGenerator<CheckResult> {
  const subject = "store";
  const place = config.store;
  const where = place.kind === "sqlite" ? place.path : withoutPassword(place.url);
  if (place.kind === "sqlite" && !(await isThere(place.path))) {
    yield { outcome: "note", subject, sentence: `${where} is not there yet: run and baseline set make it` };
    return;
  }
  try {
    const { openStore } = await import("@moorline/store");
    const store = await openStore(place);
    try {
      await store.ping();
      yield { outcome: "ok", subject, sentence: `${where} answers` };
      for (const { name } of config.streams) {
        const active = await store.baselines.active(name);
        yield active === null
          ? {
              outcome: "note",
              subject: "baseline",
              sentence: `${name} has none: moorline baseline set --stream ${name} --from FILE --activate`,
            }
          : {
              outcome: "ok",
              subject: "baseline",
              sentence: `${name} is held against ${active.baselineId.slice(0, 12)}`,
            };
      }
    } finally {
      await store.close();
    }
  } catch (error) {
    yield { outcome: "fail", subject, sentence: `${where}: ${reasonOf(error)}` };
  }
}

const CONNECT_WITHIN_MS = 5_000;

async function* checkKafka(stream: string, source: KafkaSourceConfig): AsyncGenerator<CheckResult> {
  const subject = "broker";
  const where = source.brokers.join(", ");
  const admin = new Kafka({
    clientId: "moorline-check",
    brokers: [...source.brokers],
    logLevel: logLevel.NOTHING,
    connectionTimeout: CONNECT_WITHIN_MS,
    requestTimeout: CONNECT_WITHIN_MS,
    retry: { retries: 1, initialRetryTime: 200 },
  }).admin();
  try {
    await admin.connect();
    const topics = new Set(await admin.listTopics());
    yield { outcome: "ok", subject, sentence: `${where} answers, for stream ${stream}` };
    for (const topic of source.topics) {
      if (!topics.has(topic)) {
        yield {
          outcome: "fail",
          subject: "topic",
          sentence: `${topic} is not there: create it, or name another under topics`,
        };
        continue;
      }
      const offsets = await admin.fetchTopicOffsets(topic);
      const waiting = offsets.reduce((sum, { low, high }) => sum + Number(high) - Number(low), 0);
      yield {
        outcome: "ok",
        subject: "topic",
        sentence: `${topic}: partitions ${offsets.length}, messages ${waiting}`,
      };
    }
    const deadLetters = source.deadLetterTopic;
    if (deadLetters !== null && !topics.has(deadLetters)) {
      const sentence = `${deadLetters} (dead letters) is not there: create it unless the broker creates topics by itself`;
      yield { outcome: "note", subject: "topic", sentence };
    }
  } catch (error) {
    const advice =
      "check the address under brokers, and that the broker's advertised listener can be reached from here";
    yield {
      outcome: "fail",
      subject,
      sentence: `${where} cannot be reached (${reasonOf(error)}): ${advice}`,
    };
  } finally {
    await admin.disconnect().catch(() => undefined);
  }
}

async function* checkFiles(stream: string, source: FileSourceConfig): AsyncGenerator<CheckResult> {
  for (const path of source.paths) {
    if (await isThere(path)) {
      yield { outcome: "ok", subject: "file", sentence: `${path} can be read, for stream ${stream}` };
    } else if (source.follow) {
      yield { outcome: "note", subject: "file", sentence: `${path} is not there yet: it is waited for` };
    } else {
      yield {
        outcome: "fail",
        subject: "file",
        sentence: `${path} cannot be read: name an existing file under paths`,
      };
    }
  }
}

async function isThere(path: string): Promise<boolean> {
  return access(path, constants.R_OK).then(
    () => true,
    () => false,
  );
}

function withoutPassword(url: string): string {
  return url.replace(/(\/\/[^:@/]*):[^@/]*@/, "$1:…@");
}

function reasonOf(error: unknown): string {
  if (isMoorlineError(error)) return `${error.message}; ${error.hint}`;
  const text = error instanceof Error ? error.message : String(error);
  return withoutPassword(text.split("\n")[0]!);
}
