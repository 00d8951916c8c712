import { type ConfigProblem, formatProblem } from "@moorline/config";
import { type ErrorCategory, isMoorlineError, type MoorlineError } from "@moorline/errors";
import type { CommandIo, ExitStatus } from "./command-io.js";

const STATUS_OF_CATEGORY: Readonly<Record<ErrorCategory, ExitStatus>> = {
  CONFIG: 2,
  INPUT: 2,
  STATE: 2,
  FORMAT: 3,
  UPSTREAM: 3,
  INTERNAL: 4,
};

/** Says what went wrong and what to do, in one sentence, and sets the exit status. Stack traces only with MOORLINE_DEBUG=1. */
export function reportError(io: CommandIo, error: unknown): void {
  if (isMoorlineError(error)) {
    io.exitStatus = STATUS_OF_CATEGORY[error.category];
    io.err(`moorline: ${error.message}; ${error.hint}\n${configProblems(error)}`);
  } else {
    io.exitStatus = 4;
    const text = error instanceof Error ? error.message : String(error);
    const first = text.split("\n")[0]!.slice(0, LONGEST_MESSAGE);
    io.err(
      `moorline: something unexpected happened (${first}); set MOORLINE_DEBUG=1 and run it again to see where\n`,
    );
  }
  if (io.env["MOORLINE_DEBUG"] === "1") io.err(`${detailsOf(error)}\n`);
}

const LONGEST_MESSAGE = 300;

function configProblems(error: MoorlineError): string {
  const problems = error.details["problems"];
  if (error.code !== "MOORLINE_CONFIG_INVALID" || !Array.isArray(problems)) return "";
  const file = String(error.details["file"]);
  return problems.map((problem) => `  ${formatProblem(file, problem as ConfigProblem)}\n`).join("");
}

function detailsOf(error: unknown): string {
  if (!(error instanceof Error)) return String(error);
  const cause = error.cause === undefined ? "" : `\ncaused by ${detailsOf(error.cause)}`;
  return `${error.stack ?? error.message}${cause}`;
}
