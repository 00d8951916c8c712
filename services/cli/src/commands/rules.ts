import type { Command } from "commander";
import type { CommandIo } from "../terminal/command-io.js";
import { configOf } from "../terminal/open-store.js";

export function addRulesCommand(program: Command, io: CommandIo): void {
  program
    .command("rules")
    .summary("Prometheus alert rules for this config")
    .description("Prints Prometheus alert rules for this config as YAML, to be saved as a rule file.")
    .option("--config <file>", "config file; default: moorline.yaml")
    .action(async (options: { readonly config?: string }) => {
      const config = configOf(io, options.config);
      const { prometheusRules } = await import("@moorline/evaluator");
      io.out(prometheusRules(config));
    });
}
