import type { Batch, KafkaMessage } from "kafkajs";
import type { SourceBatch, SourceRecords } from "../source.js";
import type { ReadReach } from "./read-reach.js";

/** What kafkajs delivered, with numbers for its strings. Offsets stay far below 2^53. */
export function toSourceBatch(batch: Batch, reach: ReadReach): SourceBatch {
  const { topic, partition } = batch;
  // Where the fetch began; not in the types of kafkajs.
  const fetchedOffset = Number((batch as Batch & { fetchedOffset: string }).fetchedOffset);
  return {
    topic,
    partition,
    fromOffset: reach.beginOf(topic, partition, fetchedOffset),
    toOffset: Number(batch.lastOffset()) + 1,
    endOffset: Number(batch.highWatermark),
    records: new KafkaRecords(batch.messages),
  };
}

class KafkaRecords implements SourceRecords {
  readonly #messages: readonly KafkaMessage[];

  constructor(messages: readonly KafkaMessage[]) {
    this.#messages = messages;
  }

  get length(): number {
    return this.#messages.length;
  }

  offsetAt(index: number): number {
    return Number(this.#messages[index]!.offset);
  }

  valueAt(index: number): Uint8Array | null {
    return this.#messages[index]!.value;
  }

  timestampMsAt(index: number): number | null {
    const timestampMs = Number(this.#messages[index]!.timestamp);
    return timestampMs >= 0 ? timestampMs : null;
  }
}
