import { findFeature } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { Command } from "commander";
import { chooseStream } from "../terminal/choose-stream.js";
import type { CommandIo } from "../terminal/command-io.js";
import { oneOf } from "../terminal/one-of.js";
import { configOf, withStore } from "../terminal/open-store.js";
import { storedTimeWords } from "../terminal/stored-time-words.js";
import { parseTimePoint, parseTimeRange } from "../terminal/time-point.js";

interface PairsOptions {
  readonly config?: string;
  readonly stream?: string;
  readonly feature: string;
  readonly from: string;
  readonly to: string;
  readonly slice: string;
  readonly against?: string;
  readonly baseline?: string;
  readonly format: string;
}

const COMMAND = "pairs";

export function addPairsCommand(program: Command, io: CommandIo): void {
  program
    .command(COMMAND)
    .summary("quantile pairs of a feature over a range, from the store")
    .description(
      "Prints the quantile pairs of a feature over a time range against the active baseline, another baseline or another range. Times are ISO 8601, or first, last, now with a length added or taken off: last-1h.",
    )
    .option("--stream <name>", "stream; may be left out where the config has only one")
    .requiredOption("--feature <name>", "feature")
    .option("--from <time>", "start of the range", "last-1h")
    .option("--to <time>", "end of the range", "last")
    .option("--slice <key=value>", "slice", "all")
    .option("--against <from..to>", "another range in place of the baseline")
    .option("--baseline <id>", "another baseline than the active one")
    .option("--format <format>", "json, csv, svg", "json")
    .option("--config <file>", "config file; default: moorline.yaml")
    .action((options: PairsOptions) => printPairs(options, io));
}

async function printPairs(options: PairsOptions, io: CommandIo): Promise<void> {
  const format = oneOf(COMMAND, "--format", options.format, ["json", "csv", "svg"]);
  const config = configOf(io, options.config);
  const stream = chooseStream(config, COMMAND, options.stream);
  const feature = findFeature(stream, options.feature);
  if (options.against !== undefined && options.baseline !== undefined) {
    const together = "--against and --baseline";
    throw new MoorlineError("MOORLINE_INPUT_OPTIONS_TOGETHER", { command: COMMAND, options: together });
  }
  const { readPairs } = await import("@moorline/answers");
  const { formatPairs } = await import("../pairs/format-pairs.js");
  const answer = await withStore(config, { create: false }, async (store) => {
    const words = await storedTimeWords(store, stream, io.nowMs());
    const range = {
      fromMs: parseTimePoint(COMMAND, "--from", options.from, words),
      toMs: parseTimePoint(COMMAND, "--to", options.to, words),
    };
    if (range.fromMs >= range.toMs) {
      const wanted = "before --to";
      throw new MoorlineError("MOORLINE_INPUT_OPTION", {
        command: COMMAND,
        option: "--from",
        value: options.from,
        wanted,
      });
    }
    const against =
      options.against === undefined ? null : parseTimeRange(COMMAND, "--against", options.against, words);
    const baseline = options.baseline ?? null;
    return readPairs({
      store,
      stream,
      feature,
      slice: options.slice,
      range,
      against,
      baseline,
      nowMs: io.nowMs(),
    });
  });
  if (answer.n.production === 0) io.err(`no value of ${feature.name} (${options.slice}) in this range\n`);
  io.out(formatPairs(answer, format));
}
