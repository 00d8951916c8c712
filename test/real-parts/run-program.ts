import { spawn } from "node:child_process";
import { once } from "node:events";

export interface ProgramResult {
  readonly exitCode: number | null;
  readonly stdout: string;
  readonly stderr: string;
}

/** Runs a program to its end, with `input` on its standard input. */
export async function runProgram(
  program: string,
  args: readonly string[],
  input = "",
  cwd?: string,
): Promise<ProgramResult> {
  const child = spawn(program, args, {
    stdio: ["pipe", "pipe", "pipe"],
    ...(cwd === undefined ? {} : { cwd }),
  });
  let stdout = "";
  let stderr = "";
  child.stdout.on("data", (chunk: Buffer) => {
    stdout += chunk.toString();
  });
  child.stderr.on("data", (chunk: Buffer) => {
    stderr += chunk.toString();
  });
  child.stdin.on("error", () => {});
  child.stdin.end(input);
  const [exitCode] = (await once(child, "close")) as [number | null];
  return { exitCode, stdout, stderr };
}
