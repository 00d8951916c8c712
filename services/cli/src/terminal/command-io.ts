/** Where a command reads its surroundings and writes: the process's own, or a test's. */
export interface CommandIo {
  readonly env: Readonly<Record<string, string | undefined>>;
  /** Standard output: nothing but what was asked for. */
  readonly out: (text: string) => void;
  /** Standard error: everything else. */
  readonly err: (text: string) => void;
  /** Is standard error a terminal? Progress is shown only there. */
  readonly isTerminal: boolean;
  readonly nowMs: () => number;
  /** The status that the process is to end with; 0 until a command sets it. */
  exitStatus: ExitStatus;
}

/** 0 done · 1 compare: something is adrift, audit: something is wrong · 2 usage or config · 3 outside system · 4 internal. */
export type ExitStatus = 0 | 1 | 2 | 3 | 4;

export function processIo(): CommandIo {
  return {
    env: process.env,
    out: (text) => void process.stdout.write(text),
    err: (text) => void process.stderr.write(text),
    isTerminal: process.stderr.isTTY === true,
    nowMs: () => Date.now(),
    exitStatus: 0,
  };
}
