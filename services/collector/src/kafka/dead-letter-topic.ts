import { MoorlineError } from "@moorline/errors";
import type { Kafka, Message, Producer } from "kafkajs";
import type { DeadLetter, DeadLetterSink } from "../dead-letters.js";

/** One request carries at most this much: brokers refuse batches above 1 MiB by default. */
const MOST_REQUEST_BYTES = 768 * 1024;

/**
 * Dead letters as records of a topic: the payload as it came (cut at 512 KiB), the rest in headers. The topic is made with one
 * partition when it is missing.
 */
export class DeadLetterTopic implements DeadLetterSink {
  readonly #kafka: Kafka;
  readonly #topic: string;
  #producer: Producer | null = null;

  constructor(kafka: Kafka, topic: string) {
    this.#kafka = kafka;
    this.#topic = topic;
  }

  async send(letters: readonly DeadLetter[]): Promise<void> {
    try {
      const producer = await this.#connected();
      for (const messages of inRequests(letters))
        await producer.send({ topic: this.#topic, messages, acks: -1 });
    } catch (cause) {
      const reason = (cause as Error).message;
      const details = { target: `the topic ${this.#topic}`, reason };
      throw new MoorlineError("MOORLINE_UPSTREAM_DEAD_LETTERS", details, { cause });
    }
  }

  async close(): Promise<void> {
    await this.#producer?.disconnect().catch(() => {});
    this.#producer = null;
  }

  async #connected(): Promise<Producer> {
    if (this.#producer !== null) return this.#producer;
    await this.#makeTopic();
    const producer = this.#kafka.producer({ allowAutoTopicCreation: false, retry: { retries: 3 } });
    await producer.connect();
    this.#producer = producer;
    return producer;
  }

  async #makeTopic(): Promise<void> {
    const admin = this.#kafka.admin();
    await admin.connect();
    try {
      if ((await admin.listTopics()).includes(this.#topic)) return;
      await admin.createTopics({ topics: [{ topic: this.#topic, numPartitions: 1 }], waitForLeaders: true });
    } finally {
      await admin.disconnect().catch(() => {});
    }
  }
}

function* inRequests(letters: readonly DeadLetter[]): Generator<Message[]> {
  let messages: Message[] = [];
  let bytes = 0;
  for (const letter of letters) {
    const size = 1024 + (letter.payload?.length ?? 0);
    if (bytes + size > MOST_REQUEST_BYTES && messages.length > 0) {
      yield messages;
      messages = [];
      bytes = 0;
    }
    messages.push(toMessage(letter));
    bytes += size;
  }
  if (messages.length > 0) yield messages;
}

function toMessage(letter: DeadLetter): Message {
  return {
    key: `${letter.topic}/${letter.partition}/${letter.offset}`,
    value: letter.payload === null ? null : Buffer.from(letter.payload),
    headers: {
      "moorline-reason": letter.reason,
      "moorline-detail": letter.detail,
      "moorline-stream": letter.stream,
      "moorline-topic": letter.topic,
      "moorline-partition": String(letter.partition),
      "moorline-offset": String(letter.offset),
      "moorline-payload-bytes": String(letter.payloadBytes),
    },
  };
}
