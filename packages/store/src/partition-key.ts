import type { PartitionKey } from "./store.js";

/** `topic/partition`, as the logbook and the audit name it. */
export function partitionName(key: { readonly topic: string; readonly partition: number }): string {
  return `${key.topic}/${key.partition}`;
}

/** The key as columns. */
export function keyColumns(key: PartitionKey) {
  return { stream: key.stream, topic: key.topic, partition: key.partition };
}

/** The condition that a row is the partition's. */
export function ofPartition(key: PartitionKey) {
  // biome-ignore lint/suspicious/noExplicitAny: one filter for every table that carries a partition's key.
  return (eb: any) => eb.and(keyColumns(key));
}
