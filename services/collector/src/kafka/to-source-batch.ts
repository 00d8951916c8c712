import type { Batch, KafkaMessage } from "kafkajs";
import type { SourceBatch, SourceRecord } from "../source.js";
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
    records: batch.messages.map(toRecord),
  };
}

function toRecord({ offset, value, timestamp }: KafkaMessage): SourceRecord {
  const timestampMs = Number(timestamp);
  return { offset: Number(offset), value, timestampMs: timestampMs >= 0 ? timestampMs : null };
}
