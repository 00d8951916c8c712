import { findFeature, loadTolerances } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { Command } from "commander";
import { chooseStream } from "../terminal/choose-stream.js";
import type { CommandIo } from "../terminal/command-io.js";
import { oneOf } from "../terminal/one-of.js";
import { configOf, withStore } from "../terminal/open-store.js";
import { seriesBar } from "../terminal/progress-bar.js";
import { storedTimeWords } from "../terminal/stored-time-words.js";
import { parseTimePoint } from "../terminal/time-point.js";

interface RehearseOptions {
  readonly config?: string;
  readonly stream?: string;
  readonly feature?: readonly string[];
  readonly from: string;
  readonly to: string;
  readonly tolerances?: string;
  readonly baseline?: string;
  readonly format: string;
}

const COMMAND = "rehearse";

export function addRehearseCommand(program: Command, io: CommandIo): void {
  program
    .command(COMMAND)
    .summary("stored windows through other tolerances: what would have paged")
    .description(
      "Puts stored windows through other tolerances, or another baseline, and tells what would have paged, when and for how long, beside what the config's tolerances give. Nothing is written, nothing is sent.",
    )
    .option("--stream <name>", "stream; may be left out where the config has only one")
    .option("--feature <name...>", "only these features")
    .option("--from <time>", "start of the range", "first")
    .option("--to <time>", "end of the range", "last")
    .option(
      "--tolerances <file>",
      "YAML with the keys of a stream's `decision` block; default: those of the config",
    )
    .option("--baseline <id>", "another baseline than the active one")
    .option("--format <format>", "table, json", "table")
    .option("--config <file>", "config file; default: moorline.yaml")
    .action((options: RehearseOptions) => printRehearsal(options, io));
}

async function printRehearsal(options: RehearseOptions, io: CommandIo): Promise<void> {
  const format = oneOf(COMMAND, "--format", options.format, ["table", "json"]);
  const config = configOf(io, options.config);
  const stream = chooseStream(config, COMMAND, options.stream);
  const features = options.feature?.map((name) => findFeature(stream, name)) ?? stream.features;
  const decision = options.tolerances === undefined ? stream.decision : loadTolerances(options.tolerances);
  const { rehearse } = await import("@moorline/answers");
  const { rehearsalText } = await import("../rehearsal/rehearsal-text.js");
  const bar = seriesBar(io, "rehearsing");
  const answer = await withStore(config, { create: false }, async (store) => {
    const words = await storedTimeWords(store, stream, io.nowMs());
    const range = {
      fromMs: parseTimePoint(COMMAND, "--from", options.from, words),
      toMs: parseTimePoint(COMMAND, "--to", options.to, words),
    };
    if (range.fromMs >= range.toMs) {
      const details = { command: COMMAND, option: "--from", value: options.from, wanted: "before --to" };
      throw new MoorlineError("MOORLINE_INPUT_OPTION", details);
    }
    const baseline = options.baseline ?? null;
    return rehearse({ store, stream, features, range, decision, baseline, ...bar.option });
  }).finally(() => bar.stop());
  io.out(format === "json" ? `${JSON.stringify(answer)}\n` : rehearsalText(answer));
}
