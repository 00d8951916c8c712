import { setTimeout as sleep } from "node:timers/promises";
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { CollectorBench, parcel, parcels, until } from "../../services/collector/test/collected.js";
import { startKafka } from "../real-parts/index.js";
import { type Codec, KafkaBench, type ToProduce } from "./kafka-bench.js";

let broker: Awaited<ReturnType<typeof startKafka>>;
let kafka: KafkaBench;
let bench: CollectorBench;

beforeAll(async () => {
  broker = await startKafka();
  kafka = await KafkaBench.connect(broker.bootstrap);
});
afterAll(async () => {
  await kafka.close();
  await broker.stop();
});
beforeEach(async () => {
  bench = await CollectorBench.open();
});
afterEach(() => bench.close());

const spread = (lines: readonly string[], partitions: number): ToProduce[] =>
  lines.map((value, i) => ({ partition: i % partitions, value }));

const counted = (events: number) =>
  until(`${events} events`, async () => (await bench.eventsCounted()) >= events, 40_000);

describe("a collector on a real broker", () => {
  it("counts every event of six partitions once, in each of the five codecs", async () => {
    const topic = "codecs";
    await kafka.makeTopic(topic, 6);
    const codecs: readonly Codec[] = ["none", "gzip", "snappy", "lz4", "zstd"];
    const lines = parcels(0, 3000);
    for (const codec of codecs) await kafka.produce(topic, codec, spread(lines, 6));
    const { service, telemetry } = await bench.start(bench.config(kafka.stream(topic)));
    await counted(15_000);
    expect(telemetry.health.problems()).toEqual([]);
    await service.stop();

    const sketch = (await bench.counted()).get("all")?.get("cargo_temp");
    const temps = lines.map((line) => JSON.parse(line).cargo.temp as number);
    expect(sketch?.counts).toMatchObject({ events: 15_000, finite: 15_000 });
    expect(sketch?.sum).toBe(5 * temps.reduce((sum, temp) => sum + temp, 0));
    expect([sketch?.min, sketch?.max]).toEqual([Math.min(...temps), Math.max(...temps)]);
    expect((await bench.kinds("depot=south", "door_openings"))?.events).toBe(7500);
    expect((await bench.store.audit()).clean).toBe(true);
    const rows = await bench.store.ingest.partitions("chill-risk");
    expect(rows.map((row) => [row.partition, row.nextOffset])).toEqual(
      [0, 1, 2, 3, 4, 5].map((p) => [p, 2500]),
    );
  });

  it("goes on at the stored offset after a stop, whatever the group's committed offset says", async () => {
    const topic = "restart";
    await kafka.makeTopic(topic, 2);
    await kafka.produce(topic, "none", spread(parcels(0, 1000), 2));
    const config = bench.config(kafka.stream(topic));
    const first = await bench.start(config);
    await counted(1000);
    await first.service.stop();
    await kafka.admin.setOffsets({
      groupId: `moorline-${topic}`,
      topic,
      partitions: [
        { partition: 0, offset: "3" },
        { partition: 1, offset: "499" },
      ],
    });
    await kafka.produce(topic, "lz4", spread(parcels(1000, 2000), 2));
    const second = await bench.start(config);
    await counted(2000);
    await sleep(700);
    await second.service.stop();

    expect((await bench.kinds("all", "cargo_temp"))?.events).toBe(2000);
    expect((await bench.store.audit()).clean).toBe(true);
    const committed = await kafka.admin.fetchOffsets({ groupId: `moorline-${topic}`, topics: [topic] });
    expect(committed[0]?.partitions.map((p) => p.offset)).toEqual(["1000", "1000"]);
  });

  it("counts once while collectors join and leave the group and events come in", async () => {
    const topic = "rebalance";
    await kafka.makeTopic(topic, 4);
    const config = bench.config(kafka.stream(topic));
    const first = await bench.start(config, { instance: "first" });
    const producing = (async () => {
      for (let i = 0; i < 12; i++) {
        await kafka.produce(topic, "snappy", spread(parcels(i * 500, i * 500 + 500), 4));
        await sleep(300);
      }
    })();
    await counted(500);
    const second = await bench.start(config, { instance: "second" });
    await until(
      "both own partitions",
      async () =>
        new Set((await bench.store.ingest.partitions("chill-risk")).map((row) => row.owner)).size === 2,
      30_000,
    );
    await sleep(1000);
    const stopAtMs = performance.now();
    await first.service.stop();
    expect(performance.now() - stopAtMs).toBeLessThan(5_000);
    await producing;
    await counted(6000);
    await second.service.stop();

    expect((await bench.kinds("all", "cargo_temp"))?.events).toBe(6000);
    expect((await bench.store.audit()).clean).toBe(true);
  });

  it("is not ready while the topic is missing, and reads it once it is there", async () => {
    const { service, telemetry } = await bench.start(bench.config(kafka.stream("later")));
    await until(
      "not ready",
      () => telemetry.health.problems().some((p) => p.reason.includes("later")),
      20_000,
    );
    await kafka.makeTopic("later", 1);
    await kafka.produce("later", "none", spread(parcels(0, 10), 1));
    await counted(10);
    expect(telemetry.health.problems()).toEqual([]);
    await service.stop();
  });

  it("takes up partitions that the topic gets later", async () => {
    const topic = "growing";
    await kafka.makeTopic(topic, 1);
    await kafka.produce(topic, "none", spread(parcels(0, 100), 1));
    const { service } = await bench.start(bench.config(kafka.stream(topic)));
    await counted(100);
    await kafka.admin.createPartitions({ topicPartitions: [{ topic, count: 3 }] });
    await kafka.produce(topic, "none", spread(parcels(100, 400), 3));
    await counted(400);
    await service.stop();

    expect((await bench.store.ingest.partitions("chill-risk")).length).toBe(3);
    expect((await bench.kinds("all", "cargo_temp"))?.events).toBe(400);
  });

  it("starts at the end of a topic that the store does not know when the config says latest", async () => {
    const topic = "latest";
    await kafka.makeTopic(topic, 1);
    await kafka.produce(topic, "none", spread(parcels(0, 100), 1));
    const { service } = await bench.start(bench.config(kafka.stream(topic, { start: "latest" })));
    await until(
      "claimed",
      async () => (await bench.store.ingest.partitions("chill-risk")).length === 1,
      20_000,
    );
    await kafka.produce(topic, "none", spread([parcel(1), parcel(2)], 1));
    await counted(2);
    await service.stop();

    expect((await bench.store.ingest.partitions("chill-risk"))[0]).toMatchObject({
      startOffset: 100,
      nextOffset: 102,
    });
  });
});
