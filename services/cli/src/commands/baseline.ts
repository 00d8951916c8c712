import { userInfo } from "node:os";
import type { Command } from "commander";
import { setBaseline } from "../baseline/set-baseline.js";
import { describeBaseline, listBaselines } from "../baseline/show-baselines.js";
import { chooseStream } from "../terminal/choose-stream.js";
import type { CommandIo } from "../terminal/command-io.js";
import { oneOf } from "../terminal/one-of.js";
import { configOf, withStore } from "../terminal/open-store.js";

interface CommonOptions {
  readonly config?: string;
  readonly stream?: string;
}

interface SetOptions extends CommonOptions {
  readonly from?: string;
  readonly windowRange?: string;
  readonly sql?: string;
  readonly topicRange?: string;
  readonly timeColumn?: string;
  readonly by?: string;
  readonly note?: string;
  readonly activate?: boolean;
}

interface FormatOptions extends CommonOptions {
  readonly format: string;
}

export function addBaselineCommand(program: Command, io: CommandIo): void {
  const baseline = program.command("baseline").summary("set, list, show and activate baselines");
  addSet(baseline, io);
  addList(baseline, io);
  addShow(baseline, io);
  addActivate(baseline, io);
}

const CONFIG_OPTION = ["--config <file>", "config file; default: moorline.yaml"] as const;
const STREAM_OPTION = ["--stream <name>", "stream; may be left out where the config has only one"] as const;

function addSet(baseline: Command, io: CommandIo): void {
  baseline
    .command("set")
    .description("Makes a baseline from training data and stores it. Its id is the hash of its content.")
    .option(...STREAM_OPTION)
    .option("--from <file-or-glob>", "CSV, TSV, Parquet or NDJSON files; a pattern in quotes")
    .option(
      "--window-range <from..to>",
      "stored windows: times, or first and last with 1h added or taken off",
    )
    .option("--sql <query>", "not in this version")
    .option("--topic-range <from..to>", "not in this version")
    .option("--time-column <column>", "column that orders the rows; default: the stream's event time")
    .option("--by <who>", "who sets it; default: the user's name")
    .option("--note <text>", "why")
    .option("--activate", "hold production against it from now on")
    .option(...CONFIG_OPTION)
    .action(async (options: SetOptions) => {
      const config = configOf(io, options.config);
      const stream = chooseStream(config, "baseline set", options.stream);
      await withStore(config, { create: true }, (store) =>
        setBaseline({
          ...options,
          stream,
          store,
          io,
          by: options.by ?? userName(),
          note: options.note ?? "",
        }),
      );
    });
}

function addList(baseline: Command, io: CommandIo): void {
  baseline
    .command("list")
    .description("Lists the baselines of a stream, newest first.")
    .option(...STREAM_OPTION)
    .option("--format <format>", "table, json", "table")
    .option(...CONFIG_OPTION)
    .action(async (options: FormatOptions) => {
      const format = oneOf("baseline list", "--format", options.format, ["table", "json"]);
      const config = configOf(io, options.config);
      const stream = chooseStream(config, "baseline list", options.stream);
      io.out(
        await withStore(config, { create: false }, (store) => listBaselines(store, stream.name, format)),
      );
    });
}

function addShow(baseline: Command, io: CommandIo): void {
  baseline
    .command("show")
    .description("Shows what a baseline holds and where it came from.")
    .argument("[id]", "id or the start of one; default: the active baseline")
    .option(...STREAM_OPTION)
    .option("--format <format>", "text, json", "text")
    .option(...CONFIG_OPTION)
    .action(async (id: string | undefined, options: FormatOptions) => {
      const format = oneOf("baseline show", "--format", options.format, ["text", "json"]);
      const config = configOf(io, options.config);
      const stream = chooseStream(config, "baseline show", options.stream);
      const show = { stream: stream.name, id: id ?? null, format };
      io.out(await withStore(config, { create: false }, (store) => describeBaseline(store, show)));
    });
}

function addActivate(baseline: Command, io: CommandIo): void {
  baseline
    .command("activate")
    .description("Holds production against this baseline from now on.")
    .argument("<id>", "id or the start of one")
    .option(...STREAM_OPTION)
    .option("--by <who>", "who activates it; default: the user's name")
    .option(...CONFIG_OPTION)
    .action(async (id: string, options: CommonOptions & { readonly by?: string }) => {
      const config = configOf(io, options.config);
      const stream = chooseStream(config, "baseline activate", options.stream);
      await withStore(config, { create: false }, async (store) => {
        const { findBaseline } = await import("@moorline/baseline");
        const record = await findBaseline(store, stream.name, id);
        await store.baselines.activate(stream.name, record.id, options.by ?? userName(), io.nowMs());
        io.out(`${stream.name} is now held against ${record.id}\n`);
      });
    });
}

function userName(): string {
  try {
    return userInfo().username;
  } catch {
    // A container may run as a user id without a name.
    return `user ${process.getuid?.() ?? "unknown"}`;
  }
}
