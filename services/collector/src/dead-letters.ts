import type { DeadLetterReason } from "@moorline/decode";

/** An event that could not be counted, with where it came from. */
export interface DeadLetter {
  readonly stream: string;
  readonly topic: string;
  readonly partition: number;
  readonly offset: number;
  readonly reason: DeadLetterReason;
  readonly detail: string;
  /** A copy of the first bytes, at most MOST_KEPT_BYTES. */
  readonly payload: Uint8Array | null;
  /** Bytes the payload had. */
  readonly payloadBytes: number;
}

/**
 * Where dead letters go. They are sent before the checkpoint that counts them, so a collector that dies in between sends them again
 * when it is back: topic, partition and offset name each one, and a reader drops the second.
 */
export interface DeadLetterSink {
  /** Resolves when the letters are kept as safely as the sink can. */
  send(letters: readonly DeadLetter[]): Promise<void>;
  close(): Promise<void>;
}

/** Brokers take records of 1 MiB by default; what is kept of a payload must fit with its headers. */
export const MOST_KEPT_BYTES = 512 * 1024;

/** For streams that keep none: they are counted all the same. */
export const discardDeadLetters: DeadLetterSink = {
  async send() {},
  async close() {},
};
