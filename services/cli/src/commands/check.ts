import { MoorlineError } from "@moorline/errors";
import type { Command } from "commander";
import { runChecks } from "../check/run-checks.js";
import type { CommandIo } from "../terminal/command-io.js";
import { configOf, DEFAULT_CONFIG } from "../terminal/open-store.js";

export function addCheckCommand(program: Command, io: CommandIo): void {
  program
    .command("check")
    .summary("validate the config, reach broker and store")
    .description(
      "Validates the config, reaches every broker, file and the store, and says what is wrong and what to do.",
    )
    .option("--config <file>", "config file; default: moorline.yaml")
    .action(async (options: { readonly config?: string }) => {
      const config = configOf(io, options.config);
      const features = config.streams.reduce((sum, stream) => sum + stream.features.length, 0);
      const file = options.config ?? io.env["MOORLINE_CONFIG"] ?? DEFAULT_CONFIG;
      io.out(`ok    config    ${file}: streams ${config.streams.length}, features ${features}\n`);
      let failed = 0;
      let all = 1;
      for await (const { outcome, subject, sentence } of runChecks(config)) {
        io.out(`${outcome.padEnd(5)} ${subject.padEnd(9)} ${sentence}\n`);
        all++;
        if (outcome === "fail") failed++;
      }
      if (failed > 0) throw new MoorlineError("MOORLINE_UPSTREAM_CHECK_FAILED", { count: failed, all });
    });
}
