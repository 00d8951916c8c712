import { spawn } from "node:child_process";
import { once } from "node:events";
import { mkdtemp, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { fileURLToPath } from "node:url";
import { NumericSketch } from "@moorline/sketch";
import { openStore } from "@moorline/store";
import { Kafka, logLevel } from "kafkajs";
import { CliChild, type CliResult, confluentPython, runCli, startKafka } from "../real-parts/index.js";
import { expectedPanes, type ProducedEvents } from "./expected-counts.js";

export interface ChaosOptions {
  readonly events: number;
  readonly eventsPerSecond: number;
  readonly kills: number;
  readonly brokerRestarts: number;
  /** Seeds when the kills come; a failure names it. */
  readonly seed: number;
  readonly log: (line: string) => void;
}

export interface ChaosResult {
  readonly produced: number;
  readonly inTopic: number;
  readonly counted: number;
  readonly kills: number;
  readonly brokerRestarts: number;
  readonly panes: number;
  /** Checkpoints in the store, and how often a partition changed its owner: both must be many for the run to mean anything. */
  readonly checkpoints: number;
  readonly claims: number;
  /** Every pane, slice and feature whose counts differ from what was produced. */
  readonly differences: readonly string[];
  readonly audit: CliResult;
  readonly storePath: string;
  readonly configPath: string;
  readonly folder: string;
  readonly seconds: number;
}

const TOPIC = "parcel-features";
const STREAM = "chill-risk";
const PARTITIONS = 6;
const PANE_MS = 60_000;
/** Event time that the whole run spans, in panes. */
const PANES = 40;

/**
 * Produces events while the collector is killed with SIGKILL at random and the broker is stopped and started, then compares
 * every pane's counts with what was produced. An evaluator in a process of its own writes to the same store all the while.
 */
export async function chaosRun(options: ChaosOptions): Promise<ChaosResult> {
  const started = Date.now();
  const folder = await mkdtemp(join(tmpdir(), "moorline-chaos-"));
  const kafka = await startKafka({ own: true });
  const configPath = join(folder, "moorline.yaml");
  const storePath = join(folder, "moorline.db");
  const produced: ProducedEvents = {
    events: options.events,
    partitions: PARTITIONS,
    baseMs: Math.floor((Date.now() - 3_600_000) / PANE_MS) * PANE_MS,
    stepMs: Math.max(1, Math.floor((PANES * PANE_MS) / options.events)),
    paneMs: PANE_MS,
  };
  try {
    await writeFile(configPath, configText(kafka.bootstrap, storePath));
    await createTopic(kafka.bootstrap);
    const evaluator = new CliChild(["run", "--config", configPath, "--only", "evaluator"], { cwd: folder });
    const producer = startProducer(
      await confluentPython(),
      kafka.bootstrap,
      produced,
      options.eventsPerSecond,
    );
    const chaos = await disturb(options, { configPath, storePath, folder }, kafka, producer.done);
    const delivery = await producer.done;
    options.log(`produced: ${delivery}`);
    await untilRolledUp(storePath, options);
    const inTopic = await topicLength(kafka.bootstrap);
    await sleep(2_000);
    const { counted, panes, differences } = await compareWithProduced(storePath, produced, options);
    await evaluator.end("SIGINT");
    const audit = await runCli(["audit", "--config", configPath, "--format", "json"], { cwd: folder });
    return {
      produced: options.events,
      inTopic,
      counted,
      ...chaos,
      ...(await progressOf(storePath)),
      panes,
      differences,
      audit,
      storePath,
      configPath,
      folder,
      seconds: Math.round((Date.now() - started) / 100) / 10,
    };
  } finally {
    await kafka.stop();
  }
}

function configText(bootstrap: string, storePath: string): string {
  return `store: sqlite:${storePath}
collector: { port: 0, checkpoint: 700ms }
evaluator: { port: 0 }
streams:
  - name: ${STREAM}
    source: { kafka: { brokers: ["${bootstrap}"], topics: [${TOPIC}], group: moorline-chaos, sessionTimeout: 3s } }
    payload: { format: json, eventTime: at, eventTimeUnit: ms }
    slices: [depot]
    features:
      - { name: cargo_temp, path: cargo.temp, unit: °C }
      - { name: door_openings, path: doors }
    pane: 1m
    horizons: [5m]
    lateness: 2m
    idleAfter: 2s
`;
}

function client(bootstrap: string): Kafka {
  return new Kafka({ brokers: [bootstrap], logLevel: logLevel.NOTHING, connectionTimeout: 5_000 });
}

async function createTopic(bootstrap: string): Promise<void> {
  const admin = client(bootstrap).admin();
  await admin.connect();
  await admin.createTopics({
    topics: [
      { topic: TOPIC, numPartitions: PARTITIONS },
      { topic: `${TOPIC}.dead-letters`, numPartitions: 1 },
    ],
    waitForLeaders: true,
  });
  await admin.disconnect();
}

/** Σ high watermarks: equal to what was produced, or the producer itself doubled or lost something. */
async function topicLength(bootstrap: string): Promise<number> {
  const admin = client(bootstrap).admin();
  await admin.connect();
  const offsets = await admin.fetchTopicOffsets(TOPIC);
  await admin.disconnect();
  return offsets.reduce((sum, partition) => sum + Number(partition.high), 0);
}

function startProducer(
  python: string,
  bootstrap: string,
  produced: ProducedEvents,
  rate: number,
): { readonly done: Promise<string> } {
  const script = fileURLToPath(new URL("./paced-producer.py", import.meta.url));
  const args = [bootstrap, TOPIC, PARTITIONS, produced.events, rate, produced.baseMs, produced.stepMs].map(
    String,
  );
  const child = spawn(python, [script, ...args], { stdio: ["ignore", "pipe", "pipe"] });
  let stdout = "";
  let stderr = "";
  child.stdout.on("data", (chunk: Buffer) => {
    stdout += chunk.toString();
  });
  child.stderr.on("data", (chunk: Buffer) => {
    stderr = (stderr + chunk.toString()).slice(-2_000);
  });
  const done = once(child, "close").then(([code]) => {
    if (code !== 0) throw new Error(`the producer failed with ${code}: ${stderr}`);
    return stdout.trim();
  });
  return { done };
}

/** A small seeded generator, so that a failing run can be made again (mulberry32). */
function seeded(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4_294_967_296;
  };
}

interface Place {
  readonly configPath: string;
  readonly storePath: string;
  readonly folder: string;
}

interface Broker {
  kill(): Promise<void>;
  restart(): Promise<void>;
}

/** Kills and restarts until both have happened as often as asked, while the producer runs (and after it, for what is left). */
async function disturb(
  options: ChaosOptions,
  place: Place,
  broker: Broker,
  produced: Promise<string>,
): Promise<{ kills: number; brokerRestarts: number }> {
  const random = seeded(options.seed);
  const start = () =>
    new CliChild(["run", "--config", place.configPath, "--only", "collector"], { cwd: place.folder });
  let collector = start();
  let kills = 0;
  let brokerRestarts = 0;
  let producing = true;
  produced.then(
    () => {
      producing = false;
    },
    () => {
      producing = false;
    },
  );
  const restartAt = Array.from({ length: options.brokerRestarts }, (_, k) =>
    Math.floor(((k + 1) * options.kills) / (options.brokerRestarts + 1)),
  );
  while (kills < options.kills) {
    await sleep(2_000 + random() * 5_000);
    if (!collector.running) throw new Error(`the collector ended by itself: ${collector.lastOutput}`);
    await collector.end("SIGKILL");
    kills += 1;
    options.log(`kill ${kills}/${options.kills}${producing ? "" : " (producer is done)"}`);
    if (restartAt.includes(kills)) {
      await broker.kill();
      await sleep(1_000 + random() * 2_000);
      await broker.restart();
      brokerRestarts += 1;
      options.log(`broker restarted ${brokerRestarts}/${options.brokerRestarts}`);
    }
    collector = start();
  }
  await produced;
  await untilCaughtUp(place.storePath, collector, options);
  const exitCode = await collector.end("SIGINT");
  if (exitCode !== 0)
    throw new Error(`the collector did not stop cleanly (${exitCode}): ${collector.lastOutput}`);
  return { kills, brokerRestarts };
}

async function progressOf(storePath: string): Promise<{ checkpoints: number; claims: number }> {
  const store = await openStore({ kind: "sqlite", path: storePath });
  try {
    const report = await store.audit(STREAM);
    const rows = await store.ingest.partitions(STREAM);
    const claims = rows.reduce((sum, row) => sum + row.epoch, 0);
    return { checkpoints: report.streams[0]?.checkpoints ?? 0, claims };
  } finally {
    await store.close();
  }
}

async function sumOfOffsets(storePath: string): Promise<number> {
  const store = await openStore({ kind: "sqlite", path: storePath });
  try {
    const rows = await store.ingest.partitions(STREAM);
    return rows.reduce((sum, row) => sum + row.nextOffset, 0);
  } finally {
    await store.close();
  }
}

async function untilCaughtUp(storePath: string, collector: CliChild, options: ChaosOptions): Promise<void> {
  const deadline = Date.now() + 180_000;
  for (;;) {
    const read = await sumOfOffsets(storePath);
    // A collector that has said nothing yet cannot take a signal either.
    if (read >= options.events && collector.lastOutput !== "") return;
    if (!collector.running) throw new Error(`the collector ended by itself: ${collector.lastOutput}`);
    if (Date.now() > deadline)
      throw new Error(`read ${read} of ${options.events} events: ${collector.lastOutput}`);
    await sleep(1_000);
  }
}

/** The evaluator must have rolled every pane up: nothing is pending. */
async function untilRolledUp(storePath: string, options: ChaosOptions): Promise<void> {
  const deadline = Date.now() + 120_000;
  const store = await openStore({ kind: "sqlite", path: storePath });
  try {
    for (;;) {
      const pending = await store.panes.pendingPanes(STREAM);
      if (pending.length === 0) return;
      if (Date.now() > deadline)
        throw new Error(`${pending.length} panes are still waiting for their rollup`);
      options.log(`${pending.length} panes wait for their rollup`);
      await sleep(2_000);
    }
  } finally {
    await store.close();
  }
}

async function compareWithProduced(storePath: string, produced: ProducedEvents, options: ChaosOptions) {
  const store = await openStore({ kind: "sqlite", path: storePath });
  const differences: string[] = [];
  let counted = 0;
  try {
    const rollups = await store.panes.rollups({
      stream: STREAM,
      level: "pane",
      fromMs: 0,
      toMs: Number.MAX_SAFE_INTEGER,
    });
    const byKey = new Map(rollups.map((row) => [`${row.startMs} ${row.slice} ${row.feature}`, row]));
    const expected = expectedPanes(produced);
    if (byKey.size !== expected.length * 2) {
      differences.push(`${byKey.size} rollups where ${expected.length * 2} were expected`);
    }
    for (const pane of expected) {
      const where = `${new Date(pane.paneStartMs).toISOString()} ${pane.slice}`;
      const temp = byKey.get(`${pane.paneStartMs} ${pane.slice} cargo_temp`);
      const doors = byKey.get(`${pane.paneStartMs} ${pane.slice} door_openings`);
      if (temp === undefined || doors === undefined) {
        differences.push(`${where}: no rollup`);
        continue;
      }
      const tempSketch = NumericSketch.decode(temp.body);
      const doorSketch = NumericSketch.decode(doors.body);
      if (pane.slice === "all") counted += tempSketch.counts.events;
      if (tempSketch.counts.finite !== pane.events) {
        differences.push(`${where} cargo_temp: ${tempSketch.counts.finite} values, produced ${pane.events}`);
      }
      if (Math.abs(tempSketch.sum - pane.tempSum) > 1e-6 * pane.tempSum) {
        differences.push(`${where} cargo_temp: sum ${tempSketch.sum}, produced ${pane.tempSum}`);
      }
      if (doorSketch.counts.missing !== pane.doorsMissing || doorSketch.counts.events !== pane.events) {
        differences.push(
          `${where} door_openings: ${JSON.stringify(doorSketch.counts)}, produced ${pane.events}/${pane.doorsMissing}`,
        );
      }
    }
    options.log(`${expected.length} panes and slices compared, ${differences.length} differences`);
    return { counted, panes: expected.length, differences };
  } finally {
    await store.close();
  }
}
