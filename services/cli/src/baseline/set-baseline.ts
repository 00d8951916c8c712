import { type BuiltBaseline, buildBaseline, buildWindowBaseline, manifestOf } from "@moorline/baseline";
import type { StreamConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { Store } from "@moorline/store";
import type { CommandIo } from "../terminal/command-io.js";
import { progressBar } from "../terminal/progress-bar.js";
import { storedTimeWords } from "../terminal/stored-time-words.js";
import { parseTimeRange } from "../terminal/time-point.js";

export interface SetBaselineRequest {
  readonly stream: StreamConfig;
  readonly store: Store;
  readonly io: CommandIo;
  readonly from?: string | undefined;
  readonly windowRange?: string | undefined;
  readonly sql?: string | undefined;
  readonly topicRange?: string | undefined;
  readonly timeColumn?: string | undefined;
  readonly by: string;
  readonly note: string;
  readonly activate?: boolean | undefined;
}

/** Builds a baseline, stores it, activates it if asked to, and says what was done. */
export async function setBaseline(request: SetBaselineRequest): Promise<void> {
  const { io, store, stream } = request;
  refuseLaterWork(request);
  const { record, parts } = await build(request);
  const isNew = await store.baselines.put(record, parts);
  const manifest = manifestOf(record);
  io.out(`${isNew ? "set" : "was already set:"} baseline ${record.id}\n`);
  io.out(`  ${manifest.rows.toLocaleString("en-US")} rows, ${manifest.features.length} features, `);
  io.out(`${manifest.slices.length} slices; ${manifest.blocks.sentence}\n`);
  for (const { slice, rows } of manifest.leftOutSlices.slice(0, 5)) {
    io.out(`  ${slice} has only ${rows} rows: it is held against all\n`);
  }
  if (request.activate !== true) {
    io.out(`  to hold ${stream.name} against it: moorline baseline activate ${record.id.slice(0, 12)}\n`);
    return;
  }
  await store.baselines.activate(stream.name, record.id, request.by, io.nowMs());
  io.out(`  ${stream.name} is now held against it\n`);
}

function refuseLaterWork({ sql, topicRange, from, windowRange }: SetBaselineRequest): void {
  const instead = "give training files with --from, or a stored time with --window-range";
  if (sql !== undefined) throw new MoorlineError("MOORLINE_INPUT_NOT_YET", { option: "--sql", instead });
  if (topicRange !== undefined)
    throw new MoorlineError("MOORLINE_INPUT_NOT_YET", { option: "--topic-range", instead });
  if ((from === undefined) === (windowRange === undefined)) {
    const options = "--from and --window-range";
    throw new MoorlineError("MOORLINE_INPUT_OPTIONS_TOGETHER", { command: "baseline set", options });
  }
}

async function build(request: SetBaselineRequest): Promise<BuiltBaseline> {
  const { stream, store, io, from, windowRange, timeColumn, by, note } = request;
  const common = { stream, createdBy: by, createdAtMs: io.nowMs(), note };
  if (windowRange !== undefined) {
    const words = await storedTimeWords(store, stream, io.nowMs());
    const range = parseTimeRange("baseline set", "--window-range", windowRange, words);
    return buildWindowBaseline({ ...common, store, ...range });
  }
  const bar = progressBar(io);
  try {
    return await buildBaseline({
      ...common,
      from: from!,
      ...(timeColumn !== undefined && { timeColumn }),
      ...(bar.onProgress !== undefined && { onProgress: bar.onProgress }),
    });
  } finally {
    bar.stop();
  }
}
