import { type ChildProcess, spawn } from "node:child_process";
import { once } from "node:events";
import { fileURLToPath } from "node:url";

const MAIN = fileURLToPath(new URL("../../services/cli/dist/main.js", import.meta.url));

/** The built `moorline` command as a child process, with what it wrote last kept for the failure message. */
export class MoorlineProcess {
  readonly #child: ChildProcess;
  #tail = "";

  constructor(args: readonly string[], cwd: string, env: Readonly<Record<string, string>> = {}) {
    this.#child = spawn(process.execPath, [MAIN, ...args], {
      cwd,
      env: { ...process.env, ...env },
      stdio: ["ignore", "pipe", "pipe"],
    });
    for (const stream of [this.#child.stdout, this.#child.stderr]) {
      stream?.on("data", (chunk: Buffer) => {
        this.#tail = (this.#tail + chunk.toString()).slice(-4_000);
      });
    }
  }

  get running(): boolean {
    return this.#child.exitCode === null && this.#child.signalCode === null;
  }

  get lastOutput(): string {
    return this.#tail;
  }

  /** Sends the signal and resolves with the exit code (null when the signal ended it) once the process is gone. */
  async end(signal: "SIGKILL" | "SIGINT"): Promise<number | null> {
    if (this.running) {
      const gone = once(this.#child, "exit");
      this.#child.kill(signal);
      await gone;
    }
    return this.#child.exitCode;
  }
}

export interface CommandResult {
  readonly exitCode: number | null;
  readonly stdout: string;
  readonly stderr: string;
}

/** Runs the built `moorline` command to its end. */
export async function moorlineCommand(
  args: readonly string[],
  cwd: string,
  env: Readonly<Record<string, string>> = {},
): Promise<CommandResult> {
  const child = spawn(process.execPath, [MAIN, ...args], {
    cwd,
    env: { ...process.env, ...env },
    stdio: ["ignore", "pipe", "pipe"],
  });
  let stdout = "";
  let stderr = "";
  child.stdout.on("data", (chunk: Buffer) => {
    stdout += chunk.toString();
  });
  child.stderr.on("data", (chunk: Buffer) => {
    stderr += chunk.toString();
  });
  const [exitCode] = (await once(child, "close")) as [number | null];
  return { exitCode, stdout, stderr };
}
