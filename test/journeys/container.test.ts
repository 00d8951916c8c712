import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { CollectorBench, until } from "../../services/collector/test/collected.js";
import { readFlights } from "../fixtures/flights.js";
import { type KafkaContainer, startKafkaContainer } from "../real-parts/index.js";
import { KafkaBench } from "./kafka-bench.js";

// The broker from a container image, through testcontainers. It fails, with what to do, where no Docker engine answers. The statistics of the
// same rows are held against brute force in journeys/real-data.

const PARTITIONS = 6;
const TOPIC = "flights";

let broker: KafkaContainer;
let kafka: KafkaBench;
let bench: CollectorBench;

beforeAll(async () => {
  broker = await startKafkaContainer();
  kafka = await KafkaBench.connect(broker.bootstrap);
  bench = await CollectorBench.open();
});
afterAll(async () => {
  await bench?.close();
  await kafka?.close();
  await broker?.stop();
});

describe("a collector on a broker in a container", () => {
  it("counts every tenth flight of the file, produced by librdkafka, once", async () => {
    expect(broker.via).toMatch(/^apache\/kafka:4\.\d+\.\d+ in a container, Docker engine \d/);
    const flights = readFlights().filter((_, index) => index % 10 === 0);
    const startMs = Date.now() - 6 * 3_600_000;
    await kafka.makeTopic(TOPIC, PARTITIONS);
    await kafka.produce(
      TOPIC,
      "zstd",
      flights.map((row, index) => ({
        partition: index % PARTITIONS,
        value: JSON.stringify({
          ...row,
          at: startMs + index * 1_000,
          haul: row.distance > 1_000 ? "long" : "short",
        }),
      })),
    );
    const stream = kafka.stream(
      TOPIC,
      {},
      {
        payload: { format: "json", eventTime: ["at"], eventTimeUnit: "ms" },
        slices: [{ key: "haul", path: ["haul"] }],
        features: [{ name: "delay", kind: "numeric", path: ["delay"], unit: "min" }],
      },
    );
    const { service, telemetry } = await bench.start(bench.config(stream));
    await until(
      "every flight is counted",
      async () => (await bench.eventsCounted()) >= flights.length,
      60_000,
    );
    expect(telemetry.health.problems()).toEqual([]);
    await service.stop();

    const delays = (await bench.counted()).get("all")!.get("delay")!;
    expect(delays.counts).toMatchObject({ events: 20_000, finite: 20_000, missing: 0 });
    expect(delays.sum).toBe(flights.reduce((sum, { delay }) => sum + delay, 0));
    const long = flights.filter(({ distance }) => distance > 1_000).length;
    expect((await bench.kinds("haul=long", "delay"))?.events).toBe(long);
    expect(await bench.store.audit()).toMatchObject({
      clean: true,
      findings: [],
      streams: [{ events: 20_000 }],
    });
  });
});
