import { type ChildProcess, spawn } from "node:child_process";
import { once } from "node:events";
import { fileURLToPath } from "node:url";

const MAIN = fileURLToPath(new URL("../../services/cli/dist/main.js", import.meta.url));

export interface CliOptions {
  readonly cwd: string;
  readonly env?: Readonly<Record<string, string>>;
}

/** The built `moorline` command as a child process, with all that it wrote. */
export class CliChild {
  readonly #child: ChildProcess;
  readonly #closed: Promise<unknown>;
  out = "";
  err = "";

  constructor(args: readonly string[], options: CliOptions) {
    const env = { PATH: process.env["PATH"], HOME: process.env["HOME"], ...options.env };
    this.#child = spawn(process.execPath, [MAIN, ...args], {
      cwd: options.cwd,
      env,
      stdio: ["ignore", "pipe", "pipe"],
    });
    this.#closed = once(this.#child, "close");
    this.#child.stdout!.on("data", (chunk: Buffer) => {
      this.out += chunk.toString();
    });
    this.#child.stderr!.on("data", (chunk: Buffer) => {
      this.err += chunk.toString();
    });
  }

  get running(): boolean {
    return this.#child.exitCode === null && this.#child.signalCode === null;
  }

  /** The end of what it wrote, for a failure message. */
  get lastOutput(): string {
    return (this.out + this.err).slice(-4_000);
  }

  /** Resolves with what `find` gives as soon as it gives something; fails with what was written when it takes too long. */
  async until<T>(
    what: string,
    withinMs: number,
    find: (child: this) => T | null | Promise<T | null>,
  ): Promise<T> {
    const deadline = performance.now() + withinMs;
    for (;;) {
      const found = await find(this);
      if (found !== null) return found;
      if (!this.running || performance.now() > deadline) {
        const why = this.running
          ? `not within ${withinMs} ms`
          : `the process ended with ${this.#child.exitCode}`;
        throw new Error(`${what}: ${why}\n--- stdout\n${this.out}\n--- stderr\n${this.err}`);
      }
      await new Promise((resolve) => setTimeout(resolve, 100));
    }
  }

  /** Sends a signal, if one is given, and resolves with the exit status once the process is gone and all output is read. */
  async end(signal?: NodeJS.Signals): Promise<number | null> {
    if (signal !== undefined && this.running) this.#child.kill(signal);
    await this.#closed;
    return this.#child.exitCode;
  }
}

export interface CliResult {
  readonly status: number | null;
  readonly out: string;
  readonly err: string;
}

/** Runs a command to its end. */
export async function runCli(args: readonly string[], options: CliOptions): Promise<CliResult> {
  const child = new CliChild(args, options);
  const status = await child.end();
  return { status, out: child.out, err: child.err };
}
