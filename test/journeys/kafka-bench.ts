import { spawn } from "node:child_process";
import { once } from "node:events";
import { fileURLToPath } from "node:url";
import type { KafkaSourceConfig, StreamConfig } from "@moorline/config";
import { type Admin, Kafka, type KafkaMessage, logLevel } from "kafkajs";
import { parcelStream } from "../fixtures/stream-config.js";
import { confluentPython } from "../real-parts/index.js";

export type Codec = "none" | "gzip" | "snappy" | "lz4" | "zstd";

export interface ToProduce {
  readonly partition: number;
  readonly value: Uint8Array | string | null;
}

/** Topics of a real broker, filled by a producer that is not ours. */
export class KafkaBench {
  readonly #bootstrap: string;
  readonly admin: Admin;

  private constructor(bootstrap: string, admin: Admin) {
    this.#bootstrap = bootstrap;
    this.admin = admin;
  }

  static async connect(bootstrap: string): Promise<KafkaBench> {
    const kafka = new Kafka({ brokers: [bootstrap], logLevel: logLevel.NOTHING, connectionTimeout: 5_000 });
    const admin = kafka.admin();
    await admin.connect();
    return new KafkaBench(bootstrap, admin);
  }

  async makeTopic(topic: string, numPartitions: number, maxMessageBytes = 3_000_000): Promise<void> {
    const configEntries = [{ name: "max.message.bytes", value: String(maxMessageBytes) }];
    await this.admin.createTopics({
      topics: [{ topic, numPartitions, configEntries }],
      waitForLeaders: true,
    });
  }

  /** Produces through librdkafka (python3-confluent-kafka). */
  async produce(topic: string, codec: Codec, records: Iterable<ToProduce>): Promise<void> {
    const script = fileURLToPath(new URL("./produce-lines.py", import.meta.url));
    const child = spawn(await confluentPython(), [script, this.#bootstrap, topic, codec], {
      stdio: ["pipe", "ignore", "pipe"],
    });
    let stderr = "";
    child.stderr.on("data", (chunk: Buffer) => {
      stderr = (stderr + chunk.toString()).slice(-2_000);
    });
    const closed = once(child, "close");
    const lines = [...records].map(({ partition, value }) => `${partition} ${encoded(value)}\n`);
    child.stdin.end(lines.join(""));
    const [code] = await closed;
    if (code !== 0) throw new Error(`the producer failed with ${code}: ${stderr}`);
  }

  stream(
    topic: string,
    changes: Partial<KafkaSourceConfig> = {},
    stream: Partial<StreamConfig> = {},
  ): StreamConfig {
    const source: KafkaSourceConfig = {
      kind: "kafka",
      brokers: [this.#bootstrap],
      topics: [topic],
      group: `moorline-${topic}`,
      deadLetterTopic: `${topic}.dead-letters`,
      start: "earliest",
      sessionTimeoutMs: 6_000,
      ...changes,
    };
    return parcelStream({ source, ...stream });
  }

  /** Every record of a topic, from its start to its end now. */
  async readTopic(topic: string): Promise<(KafkaMessage & { partition: number })[]> {
    const expected = (await this.admin.fetchTopicOffsets(topic)).reduce(
      (n, o) => n + Number(o.high) - Number(o.low),
      0,
    );
    const kafka = new Kafka({ brokers: [this.#bootstrap], logLevel: logLevel.NOTHING });
    const consumer = kafka.consumer({ groupId: `reader-${Date.now()}`, maxWaitTimeInMs: 200 });
    const messages: (KafkaMessage & { partition: number })[] = [];
    await consumer.connect();
    await consumer.subscribe({ topics: [topic], fromBeginning: true });
    await new Promise<void>((resolve) => {
      if (expected === 0) resolve();
      void consumer.run({
        eachMessage: async ({ message, partition }) => {
          messages.push({ ...message, partition });
          if (messages.length === expected) resolve();
        },
      });
    });
    await consumer.disconnect();
    return messages;
  }

  async close(): Promise<void> {
    await this.admin.disconnect();
  }
}

function encoded(value: Uint8Array | string | null): string {
  if (value === null) return "null";
  return Buffer.from(value).toString("base64") || "-";
}
