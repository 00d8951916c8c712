import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { type CommandIo, type ExitStatus, runCommandLine } from "../src/index.js";

export interface Captured {
  readonly status: ExitStatus;
  readonly out: string;
  readonly err: string;
}

/** Runs a command line in this process with its surroundings captured; the clock stands at 2026-06-01T00:00:00Z. */
export async function moorline(args: readonly string[], env: Record<string, string> = {}): Promise<Captured> {
  let out = "";
  let err = "";
  const io: CommandIo = {
    env,
    out: (text) => {
      out += text;
    },
    err: (text) => {
      err += text;
    },
    isTerminal: false,
    nowMs: () => Date.UTC(2026, 5, 1),
    exitStatus: 0,
  };
  const status = await runCommandLine(args, io);
  return { status, out, err };
}

/** A folder of its own, with a way to write files into it. */
export class TestFolder {
  readonly path = mkdtempSync(join(tmpdir(), "moorline-cli-"));

  write(name: string, text: string): string {
    const path = join(this.path, name);
    writeFileSync(path, text);
    return path;
  }

  at(name: string): string {
    return join(this.path, name);
  }

  remove(): void {
    rmSync(this.path, { recursive: true, force: true });
  }
}
