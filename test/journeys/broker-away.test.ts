import { setTimeout as sleep } from "node:timers/promises";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { CollectorBench, parcels, until } from "../../services/collector/test/collected.js";
import { type RunningKafka, startKafka } from "../real-parts/index.js";
import { KafkaBench } from "./kafka-bench.js";

let broker: RunningKafka;
let bench: CollectorBench;

beforeAll(async () => {
  broker = await startKafka({ own: true });
  bench = await CollectorBench.open();
});
afterAll(async () => {
  await bench.close();
  await broker.stop();
});

const TOPIC = "broker-away";

async function produce(from: number, to: number, makeTopic = false): Promise<void> {
  const kafka = await KafkaBench.connect(broker.bootstrap);
  if (makeTopic) await kafka.makeTopic(TOPIC, 3);
  await kafka.produce(
    TOPIC,
    "zstd",
    parcels(from, to).map((value, i) => ({ partition: i % 3, value })),
  );
  await kafka.close();
}

describe("a broker that is killed and comes back", () => {
  it("the collector is not ready meanwhile, makes a new consumer, and every event counts once", async () => {
    await produce(0, 900, true);
    const kafka = await KafkaBench.connect(broker.bootstrap);
    const config = bench.config(kafka.stream(TOPIC));
    await kafka.close();
    const { service, telemetry } = await bench.start(config);
    await until("900 events", async () => (await bench.eventsCounted()) === 900, 30_000);

    for (let round = 1; round <= 2; round++) {
      await broker.kill();
      await until(
        "not ready",
        () => telemetry.health.problems().some((p) => p.name.endsWith("source")),
        60_000,
      );
      await sleep(500);
      await broker.restart();
      await produce(round * 900, round * 900 + 900);
      await until("the new events", async () => (await bench.eventsCounted()) >= 900 + round * 900, 60_000);
    }
    expect(telemetry.health.problems()).toEqual([]);
    await service.stop();
    expect((await bench.kinds("all", "cargo_temp"))?.events).toBe(2700);
    expect((await bench.store.audit()).clean).toBe(true);
  });
});
