import { MoorlineError } from "@moorline/errors";
import type { Command } from "commander";
import type { CommandIo } from "../terminal/command-io.js";
import { configOf } from "../terminal/open-store.js";

interface RunCommandOptions {
  readonly config?: string;
  readonly only?: string;
  readonly demo?: boolean;
}

export function addRunCommand(program: Command, io: CommandIo): void {
  program
    .command("run")
    .summary("collect, evaluate and serve, until stopped")
    .description("Runs collector, evaluator and gateway in one process, or those of them that --only names.")
    .option("--config <file>", "config file; default: moorline.yaml")
    .option("--only <parts>", "collector, evaluator, gateway, joined by commas")
    .option("--demo", "invented data of refrigerated parcels, in .moorline/demo (or MOORLINE_DEMO_DIR)")
    .action(async (options: RunCommandOptions) => {
      const { stopSignal } = await import("../run/stop-signal.js");
      const stop = stopSignal(io);
      try {
        if (options.demo === true) await runDemo(options, io, stop.signal);
        else await runConfigured(options, io, stop.signal);
      } finally {
        stop.release();
      }
    });
}

async function runConfigured(options: RunCommandOptions, io: CommandIo, signal: AbortSignal): Promise<void> {
  const { parseParts } = await import("../run/parts.js");
  const parts = parseParts(options.only);
  const config = configOf(io, options.config);
  const { runParts } = await import("../run/run-parts.js");
  await runParts({ config, parts, io, signal });
}

async function runDemo(options: RunCommandOptions, io: CommandIo, signal: AbortSignal): Promise<void> {
  if (options.config !== undefined || options.only !== undefined) {
    const together = "--demo and --config or --only";
    throw new MoorlineError("MOORLINE_INPUT_OPTIONS_TOGETHER", { command: "run", options: together });
  }
  const { startDemo } = await import("../demo/start-demo.js");
  await startDemo(io, signal);
}
