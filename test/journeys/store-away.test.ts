import { setTimeout as sleep } from "node:timers/promises";
import { DatabaseSync } from "@photostructure/sqlite";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { CollectorBench, parcels, until } from "../../services/collector/test/collected.js";
import { startKafka } from "../real-parts/index.js";
import { KafkaBench } from "./kafka-bench.js";

let broker: Awaited<ReturnType<typeof startKafka>>;
let kafka: KafkaBench;
let bench: CollectorBench;

beforeAll(async () => {
  broker = await startKafka();
  kafka = await KafkaBench.connect(broker.bootstrap);
  bench = await CollectorBench.open();
});
afterAll(async () => {
  await bench.close();
  await kafka.close();
  await broker.stop();
});

describe("a store that is locked by another program", () => {
  it("the collector says so, keeps its partitions, and goes on without losing or doubling an event", async () => {
    const topic = "store-away";
    await kafka.makeTopic(topic, 2);
    const produce = (from: number, to: number) =>
      kafka.produce(
        topic,
        "none",
        parcels(from, to).map((value, i) => ({ partition: i % 2, value })),
      );
    await produce(0, 1000);
    // A session shorter than the lock: only heartbeats while it waits keep the partitions.
    const { service, telemetry } = await bench.start(
      bench.config(kafka.stream(topic, { sessionTimeoutMs: 6_000 })),
    );
    await until("1000 events", async () => (await bench.eventsCounted()) === 1000, 30_000);

    const intruder = new DatabaseSync(bench.storePath);
    intruder.exec("BEGIN IMMEDIATE");
    await produce(1000, 3000);
    await until("not ready", () => telemetry.health.problems().some((p) => p.name.endsWith("store")), 30_000);
    await sleep(2_000);
    expect(await bench.eventsCounted()).toBe(1000);
    intruder.exec("ROLLBACK");
    intruder.close();

    await until("3000 events", async () => (await bench.eventsCounted()) >= 3000, 30_000);
    expect(telemetry.health.problems()).toEqual([]);
    const text = await telemetry.registry.metrics();
    expect(text).not.toMatch(/moorline_collector_rejoins_total\{[^}]*\} [1-9]/);
    expect(text).toMatch(/moorline_collector_away_total\{stream="chill-risk",system="store"\} [1-9]/);
    await service.stop();
    expect((await bench.kinds("all", "cargo_temp"))?.events).toBe(3000);
    expect((await bench.store.audit()).clean).toBe(true);
  });
});
