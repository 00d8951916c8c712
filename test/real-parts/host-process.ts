import { type ChildProcess, type SpawnOptions, spawn } from "node:child_process";
import { once } from "node:events";
import { setTimeout as sleep } from "node:timers/promises";

const RUNNING = new Set<ChildProcess>();

// A test run that is broken off must not leave servers behind.
process.once("exit", () => {
  for (const child of RUNNING) child.kill("SIGKILL");
});

/** A server that a test runs on this machine; the end of what it wrote is kept for the failure message. */
export class HostProcess {
  readonly #name: string;
  readonly #child: ChildProcess;
  #tail = "";

  constructor(name: string, program: string, args: readonly string[], options: SpawnOptions = {}) {
    this.#name = name;
    this.#child = spawn(program, args, { stdio: ["ignore", "pipe", "pipe"], ...options });
    RUNNING.add(this.#child);
    this.#child.on("error", (error) => {
      this.#tail += error.message;
    });
    for (const stream of [this.#child.stdout, this.#child.stderr]) {
      stream?.on("data", (chunk: Buffer) => {
        this.#tail = (this.#tail + chunk.toString()).slice(-3_000);
      });
    }
  }

  get running(): boolean {
    return this.#child.exitCode === null && this.#child.signalCode === null;
  }

  /** Asks until `ready` answers true; a process that ends before that, or is not ready in time, is an error with its last words. */
  async untilReady(ready: () => Promise<boolean>, withinMs = 60_000): Promise<void> {
    const deadline = Date.now() + withinMs;
    while (!(await ready().catch(() => false))) {
      if (!this.running) throw new Error(`${this.#name} ended: ${this.#tail}`);
      if (Date.now() > deadline)
        throw new Error(`${this.#name} is not ready after ${withinMs} ms: ${this.#tail}`);
      await sleep(150);
    }
  }

  /** Ends the process and waits for it; SIGKILL when it has not gone after ten seconds. */
  async end(signal: NodeJS.Signals = "SIGTERM"): Promise<void> {
    if (this.running) {
      const gone = once(this.#child, "exit");
      this.#child.kill(signal);
      const late = setTimeout(() => this.#child.kill("SIGKILL"), 10_000);
      await gone;
      clearTimeout(late);
    }
    RUNNING.delete(this.#child);
  }
}
