/** Runs one task at a time, in the order they came. A task that fails fails alone. */
export class SerialQueue {
  #last: Promise<unknown> = Promise.resolve();
  #waiting = 0;

  get busy(): boolean {
    return this.#waiting > 0;
  }

  /** Resolves when everything that was asked for by now has run. */
  idle(): Promise<unknown> {
    return this.#last;
  }

  run<T>(task: () => Promise<T>): Promise<T> {
    this.#waiting++;
    const result = this.#last.then(task, task).finally(() => {
      this.#waiting--;
    });
    this.#last = result.catch(() => {});
    return result;
  }
}
