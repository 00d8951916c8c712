import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { Kafka, logLevel } from "kafkajs";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { type RunningKafka, runCli, startKafka } from "../real-parts/index.js";

// `moorline check` against a real broker: what is there, what is missing, and what to do.

const folder = mkdtempSync(join(tmpdir(), "moorline-check-"));
let kafka: RunningKafka;
beforeAll(async () => {
  kafka = await startKafka();
  const client = new Kafka({ brokers: [kafka.bootstrap], logLevel: logLevel.NOTHING });
  const admin = client.admin();
  await admin.connect();
  await admin.createTopics({
    topics: [{ topic: "parcel-features", numPartitions: 6 }],
    waitForLeaders: true,
  });
  await admin.disconnect();
  const producer = client.producer();
  await producer.connect();
  await producer.send({ topic: "parcel-features", messages: [{ value: "{}" }, { value: "{}" }] });
  await producer.disconnect();
});
afterAll(async () => {
  await kafka.stop();
  rmSync(folder, { recursive: true, force: true });
});

async function check(
  topic: string,
): Promise<{ readonly status: number | null; readonly out: string; readonly err: string }> {
  const text = `store: sqlite:./s.db
streams:
  - name: chill-risk
    source: { kafka: { brokers: ["${kafka.bootstrap}"], topics: [${topic}], group: g } }
    features: [ { name: cargo_temp } ]
`;
  writeFileSync(join(folder, "moorline.yaml"), text);
  return runCli(["check"], { cwd: folder });
}

describe("moorline check", () => {
  it("says how many partitions and messages a topic has", async () => {
    const { status, out, err } = await check("parcel-features");
    expect([status, err]).toEqual([0, ""]);
    expect(out).toMatch(/^ok +broker .* answers, for stream chill-risk$/m);
    expect(out).toMatch(/^ok +topic +parcel-features: partitions 6, messages 2$/m);
    expect(out).toMatch(/^note +topic +parcel-features\.dead-letters \(dead letters\) is not there/m);
  });

  it("ends with 3 when a topic is not there, and makes none", async () => {
    for (let time = 0; time < 2; time++) {
      const { status, out, err } = await check("parcel-featurs");
      expect(status).toBe(3);
      expect(out).toMatch(
        /^fail +topic +parcel-featurs is not there: create it, or name another under topics$/m,
      );
      expect(err).toMatch(/^moorline: 1 of \d checks failed; put right what the lines above say\n$/);
    }
  });
});
