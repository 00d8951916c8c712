import { findFeature } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { Command } from "commander";
import { chooseStream } from "../terminal/choose-stream.js";
import type { CommandIo } from "../terminal/command-io.js";
import { oneOf } from "../terminal/one-of.js";
import { configOf, withStore } from "../terminal/open-store.js";

interface SensitivityOptions {
  readonly config?: string;
  readonly stream?: string;
  readonly feature?: readonly string[];
  readonly slice: string;
  readonly eventsPerWindow?: string;
  readonly baseline?: string;
  readonly format: string;
}

const COMMAND = "sensitivity";

export function addSensitivityCommand(program: Command, io: CommandIo): void {
  program
    .command(COMMAND)
    .summary("the smallest changes that would page, and how soon")
    .description(
      "Tells for each feature and horizon the smallest move, change of spread, heavier tail and missing fraction that would make it adrift with a probability of 90 %, by how long the change lasts, from the active baseline and its sway.",
    )
    .option("--stream <name>", "stream; may be left out where the config has only one")
    .option("--feature <name...>", "only these features")
    .option("--slice <key=value>", "slice", "all")
    .option(
      "--events-per-window <n>",
      "events in a window of the shortest horizon; default: as many as came last",
    )
    .option("--baseline <id>", "another baseline than the active one")
    .option("--format <format>", "table, json", "table")
    .option("--config <file>", "config file; default: moorline.yaml")
    .action((options: SensitivityOptions) => printSensitivity(options, io));
}

async function printSensitivity(options: SensitivityOptions, io: CommandIo): Promise<void> {
  const format = oneOf(COMMAND, "--format", options.format, ["table", "json"]);
  const config = configOf(io, options.config);
  const stream = chooseStream(config, COMMAND, options.stream);
  const features = options.feature?.map((name) => findFeature(stream, name)) ?? stream.features;
  const eventsPerWindow = countOf(options.eventsPerWindow);
  const { readSensitivity } = await import("@moorline/answers");
  const { sensitivityText } = await import("../sensitivity/sensitivity-text.js");
  const answer = await withStore(config, { create: false }, (store) =>
    readSensitivity({
      store,
      stream,
      features,
      slice: options.slice,
      eventsPerWindow,
      baseline: options.baseline ?? null,
    }),
  );
  io.out(format === "json" ? `${JSON.stringify(answer)}\n` : sensitivityText(answer));
}

function countOf(text: string | undefined): number | null {
  if (text === undefined) return null;
  const count = Number(text);
  if (/^\d+(\.\d+)?$/.test(text) && count > 0) return count;
  throw new MoorlineError("MOORLINE_INPUT_OPTION", {
    command: COMMAND,
    option: "--events-per-window",
    value: JSON.stringify(text),
    wanted: "a number above 0",
  });
}
