import { setImmediate as nextTurn } from "node:timers/promises";

const LONGEST_WITHOUT_TURN_MS = 10;

/**
 * SQLite answers at once, so a row of queries is a row of resolved promises: timers, heartbeats and requests of the process would wait
 * until the last of them is done. Between two queries this lets them have their turn, at most every few milliseconds.
 */
export class EventLoopTurn {
  #lastMs = performance.now();

  async give(): Promise<void> {
    if (performance.now() - this.#lastMs < LONGEST_WITHOUT_TURN_MS) return;
    await nextTurn();
    this.#lastMs = performance.now();
  }
}
