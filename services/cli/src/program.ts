import { Command, CommanderError } from "commander";
import { cliVersion } from "./cli-version.js";
import { addAuditCommand } from "./commands/audit.js";
import { addBaselineCommand } from "./commands/baseline.js";
import { addCheckCommand } from "./commands/check.js";
import { addCompareCommand } from "./commands/compare.js";
import { addPairsCommand } from "./commands/pairs.js";
import { addRehearseCommand } from "./commands/rehearse.js";
import { addRulesCommand } from "./commands/rules.js";
import { addRunCommand } from "./commands/run.js";
import { addSensitivityCommand } from "./commands/sensitivity.js";
import type { CommandIo, ExitStatus } from "./terminal/command-io.js";
import { reportError } from "./terminal/report-error.js";

/** Runs one command line; resolves with the exit status. Never rejects. */
export async function runCommandLine(args: readonly string[], io: CommandIo): Promise<ExitStatus> {
  try {
    await programOf(io).parseAsync([...args], { from: "user" });
  } catch (error) {
    if (error instanceof CommanderError) io.exitStatus = error.exitCode === 0 ? 0 : 2;
    else reportError(io, error);
  }
  return io.exitStatus;
}

function programOf(io: CommandIo): Command {
  const program = new Command("moorline")
    .description("Holds a model's live inputs against the data it was trained on.")
    .version(cliVersion())
    .exitOverride()
    .showHelpAfterError("(moorline --help shows what there is)")
    .configureOutput({
      writeOut: io.out,
      writeErr: io.err,
      outputError: (text, write) => write(`moorline: ${text.replace(/^error: /, "")}`),
    });
  addRunCommand(program, io);
  addBaselineCommand(program, io);
  addCompareCommand(program, io);
  addPairsCommand(program, io);
  addSensitivityCommand(program, io);
  addRehearseCommand(program, io);
  addAuditCommand(program, io);
  addCheckCommand(program, io);
  addRulesCommand(program, io);
  return program;
}
