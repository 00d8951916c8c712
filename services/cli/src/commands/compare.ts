import type { Command } from "commander";
import { compareFiles } from "../compare/compare-files.js";
import { COMPARE_FORMATS, formatComparison } from "../compare/format-comparison.js";
import type { CommandIo } from "../terminal/command-io.js";
import { oneOf } from "../terminal/one-of.js";
import { progressBar } from "../terminal/progress-bar.js";

interface CompareOptions {
  readonly feature?: readonly string[];
  readonly categorical?: readonly string[];
  readonly sliceBy?: string;
  readonly format: string;
}

export function addCompareCommand(program: Command, io: CommandIo): void {
  program
    .command("compare")
    .summary("hold one file against another")
    .description(
      "Holds the columns of a production file against those of a baseline file, numbers by their distribution and text by its categories (CSV, TSV, Parquet, NDJSON; a pattern in quotes reads several files). Ends with 1 when a feature is adrift.",
    )
    .argument("<baseline-file>", "what production should look like")
    .argument("<production-file>", "what came")
    .option(
      "--feature <names...>",
      "columns to compare; default: every numeric and text column that both files have",
    )
    .option("--categorical <names...>", "columns to compare by their categories, whatever they hold")
    .option("--slice-by <column>", "also compare apart by each value of this column")
    .option("--format <format>", COMPARE_FORMATS.join(", "), "table")
    .action(async (baseline: string, production: string, options: CompareOptions) => {
      const format = oneOf("compare", "--format", options.format, COMPARE_FORMATS);
      const bar = progressBar(io);
      const notes: string[] = [];
      try {
        const comparison = await compareFiles({
          baseline,
          production,
          features: options.feature ?? [],
          categorical: options.categorical ?? [],
          sliceBy: options.sliceBy ?? null,
          onProgress: bar.onProgress,
          onNote: (sentence) => notes.push(sentence),
        });
        bar.stop();
        io.out(formatComparison(comparison, format));
        for (const note of new Set(notes)) io.err(`${note}\n`);
        if (comparison.features.some(({ state }) => state === "adrift")) io.exitStatus = 1;
      } finally {
        bar.stop();
      }
    });
}
