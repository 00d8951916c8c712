import type { BatchControl } from "../source.js";

/** kafkajs's heartbeat for one batch, which remembers what it threw: that error belongs to kafkajs and must reach it. */
export class HeartbeatControl implements BatchControl {
  readonly #heartbeat: () => Promise<void>;
  readonly #lowOffset: () => Promise<number>;
  #failure: unknown;

  constructor(heartbeat: () => Promise<void>, lowOffset: () => Promise<number>) {
    this.#heartbeat = heartbeat;
    this.#lowOffset = lowOffset;
  }

  async heartbeat(): Promise<void> {
    try {
      await this.#heartbeat();
    } catch (error) {
      this.#failure = error;
      throw error;
    }
  }

  async lowOffset(): Promise<number> {
    return this.#lowOffset();
  }

  /** Is this the error that the heartbeat threw? */
  threw(error: unknown): boolean {
    return this.#failure !== undefined && error === this.#failure;
  }
}
