import { existsSync, writeFileSync } from "node:fs";
import { buildBaseline, manifestOf } from "@moorline/baseline";
import { loadConfig, type MoorlineConfig } from "@moorline/config";
import type { Store } from "@moorline/store";
import { createTelemetry } from "@moorline/telemetry";
import { connectStore } from "../run/connect-store.js";
import { PARTS } from "../run/parts.js";
import { checkPorts } from "../run/run-parts.js";
import { type Services, startServices } from "../run/start-services.js";
import { aborted } from "../run/stop-signal.js";
import type { CommandIo } from "../terminal/command-io.js";
import { progressBar } from "../terminal/progress-bar.js";
import { DEMO_STREAM, demoConfigText } from "./demo-config.js";
import { type DemoFolder, openDemoFolder } from "./demo-folder.js";
import { eventTime, goodbye, NOTICE, welcome, whatToTry, whereToLook } from "./demo-words.js";
import { FeedWriter } from "./feed-writer.js";
import { StateWatch } from "./state-watch.js";
import { TRAINING_ROWS, writeTraining } from "./write-training.js";

/**
 * Runs the demo until it is told to stop. Everything but the invented events is what any other stream goes through: the training file
 * becomes a baseline, the feed's files are a file source, and what is said comes from the store.
 */
export async function startDemo(io: CommandIo, signal: AbortSignal): Promise<void> {
  const folder = openDemoFolder(io.env);
  if (!existsSync(folder.config)) writeFileSync(folder.config, demoConfigText());
  const config = loadConfig(folder.config, io.env);
  await checkPorts(config, PARTS);
  io.out(welcome());
  const telemetry = createTelemetry({
    service: "demo",
    logFormat: io.isTerminal ? "lines" : "json",
    logLevel: io.env["MOORLINE_LOG_LEVEL"] || "error",
  });
  const store = await connectStore(config.store, telemetry.logger, signal);
  try {
    await prepareBaseline(store, config, folder, io);
    if (signal.aborted) return;
    const feed = new FeedWriter(folder, io.nowMs());
    const services = await startServices({ config, store, telemetry, parts: PARTS, notice: NOTICE });
    await stream({ io, signal, folder, config, store, feed, services });
  } finally {
    await store.close();
  }
}

async function prepareBaseline(
  store: Store,
  config: MoorlineConfig,
  folder: DemoFolder,
  io: CommandIo,
): Promise<void> {
  const known = await store.baselines.active(DEMO_STREAM);
  if (known !== null) {
    io.out(`Baseline  ${known.baselineId.slice(0, 12)} is set from the last time.\n`);
    return;
  }
  if (!existsSync(folder.training)) {
    io.out(
      `Training  writing ${folder.training}: ${TRAINING_ROWS.toLocaleString("en-US")} invented events of 14 days …\n`,
    );
    await writeTraining(folder.training);
  }
  const startedMs = performance.now();
  const bar = progressBar(io);
  const request = {
    stream: config.streams[0]!,
    from: folder.training,
    createdBy: "the demo",
    createdAtMs: io.nowMs(),
  };
  const note = "invented data of the demo";
  const { record, parts } = await buildBaseline({
    ...request,
    note,
    ...(bar.onProgress !== undefined && { onProgress: bar.onProgress }),
  }).finally(() => bar.stop());
  await store.baselines.put(record, parts);
  await store.baselines.activate(DEMO_STREAM, record.id, request.createdBy, io.nowMs());
  const { features, slices, blocks } = manifestOf(record);
  const seconds = ((performance.now() - startedMs) / 1_000).toFixed(1);
  io.out(
    `Baseline  ${record.id.slice(0, 12)} made and activated in ${seconds} s: ${features.length} features, `,
  );
  io.out(`${slices.length} slices, ${blocks.sentence}.\n`);
}

interface Streaming {
  readonly io: CommandIo;
  readonly signal: AbortSignal;
  readonly folder: DemoFolder;
  readonly config: MoorlineConfig;
  readonly store: Store;
  readonly feed: FeedWriter;
  readonly services: Services;
}

/** The feed flows and changes are told, until the end. */
async function stream({ io, signal, folder, config, store, feed, services }: Streaming): Promise<void> {
  const { publicUrl: url } = config.gateway;
  const goesOn = feed.resumed ? "goes on" : "starts";
  io.out(
    `Feed      ${goesOn} at ${eventTime(feed.nextMs)} event time: about 150 events an event minute, in 3 files that grow.\n`,
  );
  io.out(whereToLook(url, feed.isTired));
  let fail: (error: unknown) => void = () => {};
  const failed = new Promise<never>((_, reject) => {
    fail = reject;
  });
  const onFirstAdrift = () => io.out(whatToTry(folder, url));
  const watch = new StateWatch({ store, stream: DEMO_STREAM, say: io.out, onFirstAdrift, onFailure: fail });
  await watch.start();
  feed.start(fail);
  try {
    await Promise.race([aborted(signal), services.ended, failed]);
  } finally {
    feed.stop();
    await watch.stop();
    await services.stop();
  }
  const partitions = await store.ingest.partitions(DEMO_STREAM);
  io.out(
    goodbye(
      partitions.reduce((sum, partition) => sum + partition.events, 0),
      feed.nextMs,
    ),
  );
}
