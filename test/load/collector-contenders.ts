import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { registerCodecs, startCollector } from "@moorline/collector";
import type { MoorlineConfig, StreamConfig } from "@moorline/config";
import { openStore } from "@moorline/store";
import { createTelemetry } from "@moorline/telemetry";
import { type EachBatchPayload, Kafka, logLevel } from "kafkajs";

export const CONTENDERS = ["kafkajs", "kafkajs+parse", "collector", "collector-unsliced"] as const;
export type Contender = (typeof CONTENDERS)[number];

export interface Reading {
  readonly events: number;
  readonly cpuMs: number;
  readonly wallMs: number;
}

export interface ContenderTask {
  readonly bootstrap: string;
  readonly topic: string;
  readonly events: number;
  readonly features: number;
  readonly partitions: number;
}

/** Reads the whole topic once, from connecting to disconnecting, in this process. */
export async function readAs(contender: Contender, task: ContenderTask): Promise<Reading> {
  const run = contender.startsWith("collector")
    ? await prepareCollector(task, contender === "collector")
    : await prepareConsumer(task, contender === "kafkajs+parse");
  const cpu = process.cpuUsage();
  const wallMs = performance.now();
  const events = await run();
  const used = process.cpuUsage(cpu);
  return { events, cpuMs: (used.user + used.system) / 1000, wallMs: performance.now() - wallMs };
}

async function prepareConsumer(task: ContenderTask, parse: boolean): Promise<() => Promise<number>> {
  registerCodecs();
  const kafka = new Kafka({ brokers: [task.bootstrap], logLevel: logLevel.NOTHING });
  const consumer = kafka.consumer({ groupId: `measure-${process.pid}`, maxWaitTimeInMs: 300 });
  let events = 0;
  let objects = 0;
  return async () => {
    await consumer.connect();
    await consumer.subscribe({ topics: [task.topic], fromBeginning: true });
    await new Promise<void>((resolve) => {
      const eachBatch = async ({ batch, resolveOffset }: EachBatchPayload) => {
        if (parse) {
          for (const { value } of batch.messages) {
            if (typeof JSON.parse(value!.toString()) === "object") objects++;
          }
        }
        events += batch.messages.length;
        resolveOffset(batch.lastOffset());
        if (events >= task.events) resolve();
      };
      void consumer.run({
        autoCommit: false,
        eachBatchAutoResolve: false,
        partitionsConsumedConcurrently: 3,
        eachBatch,
      });
    });
    await consumer.disconnect();
    if (parse && objects !== events) throw new Error(`${objects} of ${events} events parsed`);
    return events;
  };
}

async function prepareCollector(task: ContenderTask, sliced: boolean): Promise<() => Promise<number>> {
  const folder = await mkdtemp(join(tmpdir(), "moorline-measure-"));
  const config = configOf(task, join(folder, "moorline.db"), sliced);
  const store = await openStore(config.store);
  await store.migrate();
  const telemetry = createTelemetry({ service: "collector", logLevel: "warn" });
  return async () => {
    const collector = await startCollector({ config, store, telemetry });
    for (;;) {
      const { values } = await telemetry.metrics.lagMessages.get();
      if (values.length === task.partitions && values.every((series) => series.value === 0)) break;
      await sleep(20);
    }
    await collector.stop();
    const rows = await store.ingest.partitions("measure");
    await store.close();
    await rm(folder, { recursive: true });
    return rows.reduce((sum, row) => sum + row.events, 0);
  };
}

function configOf(task: ContenderTask, path: string, sliced: boolean): MoorlineConfig {
  const listen = { host: "127.0.0.1", port: 0 };
  const stream: StreamConfig = {
    name: "measure",
    source: {
      kind: "kafka",
      brokers: [task.bootstrap],
      topics: [task.topic],
      group: `measure-${process.pid}`,
      deadLetterTopic: null,
      start: "earliest",
      sessionTimeoutMs: 30_000,
    },
    payload: { format: "json", eventTime: ["at"], eventTimeUnit: "ms" },
    slices: sliced ? [{ key: "depot", path: ["depot"] }] : [],
    sliceLimit: 50,
    features: Array.from({ length: task.features }, (_, f) => ({
      name: `f${f}`,
      kind: "numeric" as const,
      path: f % 3 === 0 ? ["cargo", `f${f}`] : [`f${f}`],
      unit: null,
    })),
    paneMs: 60_000,
    horizons: [{ label: "5m", ms: 300_000 }],
    latenessMs: 120_000,
    idleAfterMs: 300_000,
    silentAfterMs: 600_000,
    maxAheadMs: 3_600_000,
    maxAgeMs: null,
    decision: { persistence: 3, releaseAfter: 6, bodyFloor: 0.1, tailFactor: 2 },
  };
  return {
    store: { kind: "sqlite", path },
    gateway: { ...listen, publicUrl: "http://127.0.0.1" },
    collector: { ...listen, checkpointMs: 5_000, checkpointEvents: 200_000, checkpointBytes: 2 ** 28 },
    evaluator: { ...listen, tickMs: 1_000 },
    streams: [stream],
  };
}
