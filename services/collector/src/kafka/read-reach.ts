/**
 * How far kafkajs has read a partition without a hole since we last set its position.
 *
 * Batches that hold nothing but control records or aborted transactions never reach the handler, and the next one begins after
 * them. Followed here, such a batch is known to continue the last; any other jump is for the guard to judge.
 */
export class ReadReach {
  readonly #reach = new Map<string, { from: number; to: number }>();

  /** The position was set, or a batch was taken up to here. */
  set(topic: string, partition: number, offset: number): void {
    this.#reach.set(nameOf(topic, partition), { from: offset, to: offset });
  }

  /** A batch without records for us ended before this offset. */
  passOver(topic: string, partition: number, toOffset: number): void {
    const reach = this.#reach.get(nameOf(topic, partition));
    if (reach !== undefined && toOffset > reach.to) reach.to = toOffset;
  }

  /** Where a batch fetched from this offset really begins. */
  beginOf(topic: string, partition: number, fetchedOffset: number): number {
    const reach = this.#reach.get(nameOf(topic, partition));
    return reach !== undefined && reach.to === fetchedOffset ? reach.from : fetchedOffset;
  }

  clear(): void {
    this.#reach.clear();
  }
}

function nameOf(topic: string, partition: number): string {
  return `${partition}/${topic}`;
}
