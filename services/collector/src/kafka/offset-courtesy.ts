import type { Consumer } from "kafkajs";

const EVERY_MS = 1_000;

/**
 * Tells Kafka which offsets are in the store, for tools that show a group's lag. The store is the truth: what fails here is left
 * to the next time.
 */
export class OffsetCourtesy {
  readonly #consumer: Consumer;
  readonly #offsets = new Map<string, { topic: string; partition: number; offset: string }>();
  #timer: NodeJS.Timeout | null = null;
  #sending: Promise<void> = Promise.resolve();

  constructor(consumer: Consumer) {
    this.#consumer = consumer;
  }

  note(topic: string, partition: number, nextOffset: number): void {
    this.#offsets.set(`${partition}/${topic}`, { topic, partition, offset: String(nextOffset) });
    this.#timer ??= setTimeout(() => {
      this.#timer = null;
      void this.send();
    }, EVERY_MS);
  }

  /** Partitions were reassigned: their offsets are the next owner's to tell. */
  clear(): void {
    this.#offsets.clear();
    if (this.#timer !== null) clearTimeout(this.#timer);
    this.#timer = null;
  }

  send(): Promise<void> {
    const offsets = [...this.#offsets.values()];
    this.#offsets.clear();
    if (offsets.length > 0) {
      this.#sending = this.#sending.then(() => this.#consumer.commitOffsets(offsets)).catch(() => {});
    }
    return this.#sending;
  }
}
