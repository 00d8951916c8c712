import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { CollectorBench, parcel, until } from "../../services/collector/test/collected.js";
import { MALFORMED_EVENTS, MALFORMED_NOW_MS } from "../fixtures/malformed-events.js";
import { startKafka } from "../real-parts/index.js";
import { KafkaBench, type ToProduce } from "./kafka-bench.js";

const TOPIC = "malformed";
/** The table and a tombstone, each at an odd offset; good events at the even ones. */
const malformed = [
  ...MALFORMED_EVENTS,
  { title: "a record without a value", payload: null, reason: "empty" },
];

let broker: Awaited<ReturnType<typeof startKafka>>;
let kafka: KafkaBench;
let bench: CollectorBench;
let metrics = "";
const letters = new Map<number, { reason: string; headers: Record<string, string>; value: Buffer | null }>();

beforeAll(async () => {
  broker = await startKafka();
  kafka = await KafkaBench.connect(broker.bootstrap);
  bench = await CollectorBench.open();
  await kafka.makeTopic(TOPIC, 1);
  const records = malformed.flatMap(({ payload }, i): ToProduce[] => [
    { partition: 0, value: parcel(i) },
    { partition: 0, value: payload },
  ]);
  await kafka.produce(TOPIC, "none", [...records, { partition: 0, value: parcel(malformed.length) }]);

  const config = bench.config(kafka.stream(TOPIC));
  const { service, telemetry } = await bench.start(config, { nowMs: () => MALFORMED_NOW_MS });
  await until("every good event", async () => (await bench.eventsCounted()) === malformed.length + 1, 40_000);
  await service.stop();
  metrics = await telemetry.registry.metrics();
  for (const { headers, value } of await kafka.readTopic(`${TOPIC}.dead-letters`)) {
    const plain = Object.fromEntries(
      Object.entries(headers ?? {}).map(([name, text]) => [name, String(text)]),
    );
    letters.set(Number(plain["moorline-offset"]), {
      reason: plain["moorline-reason"]!,
      headers: plain,
      value,
    });
  }
});
afterAll(async () => {
  await bench.close();
  await kafka.close();
  await broker.stop();
});

describe("malformed events on a real broker", () => {
  it("the table has at least 40 malformed messages", () => {
    expect(malformed.length).toBeGreaterThanOrEqual(40);
  });

  it.each(malformed.map((event, i) => ({ ...event, offset: 2 * i + 1 })))(
    "$title is dead-lettered as $reason, with its offset and bytes",
    ({ offset, reason, payload }) => {
      const letter = letters.get(offset);
      expect(letter).toMatchObject({
        reason,
        headers: { "moorline-topic": TOPIC, "moorline-partition": "0", "moorline-stream": "chill-risk" },
      });
      expect(letter!.headers["moorline-payload-bytes"]).toBe(String(payload?.length ?? 0));
      expect(
        Buffer.from(letter!.value ?? []).equals(Buffer.from(payload ?? []).subarray(0, 512 * 1024)),
      ).toBe(true);
    },
  );

  it("nothing else is dead-lettered, and the good events around them are counted", async () => {
    expect([...letters.keys()].sort((a, b) => a - b)).toEqual(malformed.map((_, i) => 2 * i + 1));
    expect((await bench.kinds("all", "cargo_temp"))?.finite).toBe(malformed.length + 1);
    const audit = await bench.store.audit();
    expect(audit.clean).toBe(true);
    expect(audit.streams[0]).toMatchObject({ events: malformed.length + 1, deadLetters: malformed.length });
  });

  it("each reason is counted in moorline_dead_letters_total", () => {
    const expected = new Map<string, number>();
    for (const { reason } of malformed) expected.set(reason, (expected.get(reason) ?? 0) + 1);
    for (const [reason, count] of expected) {
      expect(metrics).toContain(
        `moorline_dead_letters_total{stream="chill-risk",reason="${reason}"} ${count}\n`,
      );
    }
  });
});
