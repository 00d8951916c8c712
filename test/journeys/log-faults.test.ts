import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { CollectorBench, parcels, until } from "../../services/collector/test/collected.js";
import { startKafka } from "../real-parts/index.js";
import { KafkaBench, type ToProduce } from "./kafka-bench.js";

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

const toFirst = (lines: readonly string[]): ToProduce[] => lines.map((value) => ({ partition: 0, value }));

const counted = (events: number) =>
  until(`${events} events`, async () => (await bench.eventsCounted()) >= events, 40_000);

async function remake(topic: string): Promise<void> {
  await kafka.admin.deleteTopics({ topics: [topic] });
  await until("the topic is gone", async () => !(await kafka.admin.listTopics()).includes(topic));
  await kafka.makeTopic(topic, 1);
}

describe("a log that is not the one that was read", () => {
  it("a recreated topic halts its partition loudly, at every start, and nothing of it is read", async () => {
    const topic = "recreated";
    await kafka.makeTopic(topic, 1);
    await kafka.produce(topic, "none", toFirst(parcels(0, 500)));
    const config = bench.config(kafka.stream(topic));
    const first = await bench.start(config);
    await counted(500);
    await first.service.stop();
    await remake(topic);
    await kafka.produce(topic, "none", toFirst(parcels(0, 100)));

    for (let start = 0; start < 2; start++) {
      const { service, telemetry } = await bench.start(config);
      await until(
        "halted",
        () => telemetry.health.problems().some((p) => p.name.includes("recreated/0")),
        30_000,
      );
      await service.stop();
    }
    expect((await bench.store.ingest.partitions("chill-risk"))[0]).toMatchObject({
      status: "log-rewound",
      events: 500,
      nextOffset: 500,
    });
    const entries = await bench.store.logbook.entries({ stream: "chill-risk", limit: 50 });
    const rewound = entries.filter((entry) => entry.kind === "log-rewound");
    expect(rewound).toHaveLength(1);
    expect(rewound[0]?.subject).toContain("recreated");
  });

  it("offsets that retention took are a gap in store, logbook and metrics, and the rest is counted", async () => {
    const topic = "retention";
    await kafka.makeTopic(topic, 1);
    await kafka.produce(topic, "none", toFirst(parcels(0, 500)));
    const config = bench.config(kafka.stream(topic));
    const first = await bench.start(config);
    await counted(500);
    await first.service.stop();
    await kafka.produce(topic, "gzip", toFirst(parcels(500, 1500)));
    await kafka.admin.fetchTopicOffsets(topic); // kafkajs deletes only from topics whose leaders it has looked up
    await kafka.admin.deleteTopicRecords({ topic, partitions: [{ partition: 0, offset: "800" }] });
    const { service, telemetry } = await bench.start(config);
    await counted(1200);
    await service.stop();

    expect(await bench.store.ingest.gaps("chill-risk")).toMatchObject([
      { topic, partition: 0, fromOffset: 500, toOffset: 800 },
    ]);
    expect((await bench.kinds("all", "cargo_temp"))?.events).toBe(1200);
    expect((await bench.store.audit()).clean).toBe(true);
    expect(await telemetry.registry.metrics()).toContain(
      'moorline_collector_gap_messages_total{stream="chill-risk"} 300',
    );
    const entries = await bench.store.logbook.entries({
      stream: "chill-risk",
      kind: "offset-gap",
      limit: 10,
    });
    expect(entries).toHaveLength(1);
  });
});
