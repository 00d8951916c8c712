import { setTimeout as sleep } from "node:timers/promises";
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

describe("two owners of one partition", () => {
  it("of two collectors forced onto one partition the older epoch writes nothing, and every event counts once", async () => {
    const topic = "two-owners";
    await kafka.makeTopic(topic, 1);
    const toFirst = (from: number, to: number) => parcels(from, to).map((value) => ({ partition: 0, value }));
    await kafka.produce(topic, "none", toFirst(0, 1000));
    // Two groups: Kafka gives each of them the partition, as it would a collector that does not know it was replaced.
    const forced = (group: string) => bench.config(kafka.stream(topic, { group }), { checkpointMs: 1000 });
    const older = await bench.start(forced("older"), { instance: "older" });
    await until("1000 events", async () => (await bench.eventsCounted()) === 1000, 30_000);
    const epochOfOlder = (await bench.store.ingest.partitions("chill-risk"))[0]!.epoch;

    const newer = await bench.start(forced("newer"), { instance: "newer" });
    await until(
      "the newer owner",
      async () => (await bench.store.ingest.partitions("chill-risk"))[0]?.owner === "newer",
      30_000,
    );
    for (let i = 0; i < 10; i++) {
      await kafka.produce(topic, "lz4", toFirst(1000 + i * 300, 1300 + i * 300));
      await sleep(200);
    }
    await until("4000 events", async () => (await bench.eventsCounted()) >= 4000, 40_000);
    await Promise.all([older.service.stop(), newer.service.stop()]);

    const fencedOf = async (running: typeof older) => {
      const text = await running.telemetry.registry.metrics();
      return Number(/moorline_collector_fenced_total\{[^}]*\} (\d+)/.exec(text)?.[1] ?? 0);
    };
    expect((await fencedOf(older)) + (await fencedOf(newer))).toBeGreaterThanOrEqual(1);
    const [row] = await bench.store.ingest.partitions("chill-risk");
    expect(row).toMatchObject({ events: 4000, nextOffset: 4000 });
    expect(row!.epoch).toBeGreaterThan(epochOfOlder);
    expect((await bench.kinds("all", "cargo_temp"))?.events).toBe(4000);
    expect((await bench.store.audit()).clean).toBe(true);
  });
});
