// Collector against bare kafkajs on the same topic of a real broker. Talks on stderr; the last line of stdout is one JSON object.
// usage: node --import tsx test/load/measure-collector.ts [--events 600000] [--features 30] [--rounds 5]
//        [--codec lz4] [--seed 7] [--rate 50000]
// Event times are those of a stream of `rate` events a second: of a slower one a replay opens and writes more panes in the same work.

import { spawn } from "node:child_process";
import { once } from "node:events";
import { fileURLToPath } from "node:url";
import { parseArgs } from "node:util";
import { Kafka, logLevel } from "kafkajs";
import { confluentPython, startKafka } from "../real-parts/index.js";
import {
  CONTENDERS,
  type Contender,
  type ContenderTask,
  type Reading,
  readAs,
} from "./collector-contenders.js";

const PARTITIONS = 6;
const TOPIC = "measure";

const { values } = parseArgs({
  options: {
    events: { type: "string", default: "600000" },
    features: { type: "string", default: "30" },
    rounds: { type: "string", default: "5" },
    codec: { type: "string", default: "lz4" },
    seed: { type: "string", default: "7" },
    rate: { type: "string", default: "50000" },
    contender: { type: "string" },
    bootstrap: { type: "string", default: "" },
  },
});
const events = Number(values.events);
const features = Number(values.features);

if (values.contender !== undefined) {
  const task: ContenderTask = {
    bootstrap: values.bootstrap,
    topic: TOPIC,
    events,
    features,
    partitions: PARTITIONS,
  };
  const reading = await readAs(values.contender as Contender, task);
  process.stdout.write(`${JSON.stringify(reading)}\n`, () => process.exit(0));
} else {
  await measure();
}

async function measure(): Promise<void> {
  const kafka = await startKafka();
  try {
    await makeTopic(kafka.bootstrap);
    say(`producing ${events} events of ${features} features, ${values.codec}`);
    await produce(kafka.bootstrap);
    const readings = new Map<Contender, Reading[]>(CONTENDERS.map((contender) => [contender, []]));
    for (let round = 0; round < Number(values.rounds); round++) {
      for (const contender of CONTENDERS) {
        const reading = await readInOwnProcess(contender, kafka.bootstrap);
        if (reading.events !== events)
          throw new Error(`${contender} saw ${reading.events} of ${events} events`);
        readings.get(contender)!.push(reading);
        say(
          `round ${round}: ${contender} ${perEvent(reading.cpuMs)} us CPU, ${perEvent(reading.wallMs)} us wall an event`,
        );
      }
    }
    process.stdout.write(`${JSON.stringify(summary(readings))}\n`);
  } finally {
    await kafka.stop();
  }
}

function summary(readings: ReadonlyMap<Contender, readonly Reading[]>): object {
  const cpu = (contender: Contender) => median(readings.get(contender)!.map((r) => r.cpuMs));
  const wall = (contender: Contender) => median(readings.get(contender)!.map((r) => r.wallMs));
  const figures = Object.fromEntries(
    CONTENDERS.map((contender) => [
      contender,
      {
        cpuMicrosecondsPerEvent: perEvent(cpu(contender)),
        eventsPerSecondPerCore: Math.round((events / cpu(contender)) * 1000),
        eventsPerSecondWall: Math.round((events / wall(contender)) * 1000),
        valuesPerSecondPerCore: Math.round(((events * features) / cpu(contender)) * 1000),
      },
    ]),
  );
  const share = (contender: Contender, of: Contender) => Math.round((cpu(of) / cpu(contender)) * 1000) / 1000;
  return {
    measure: "collector",
    events,
    features,
    partitions: PARTITIONS,
    codec: values.codec,
    eventTimeRate: Number(values.rate),
    seed: Number(values.seed),
    rounds: Number(values.rounds),
    node: process.version,
    contenders: figures,
    collectorShareOfKafkajs: share("collector", "kafkajs"),
    collectorShareOfKafkajsAndParse: share("collector", "kafkajs+parse"),
    unslicedShareOfKafkajsAndParse: share("collector-unsliced", "kafkajs+parse"),
    gate: { collectorShareOfKafkajsAndParse: 0.7 },
  };
}

async function makeTopic(bootstrap: string): Promise<void> {
  const admin = new Kafka({ brokers: [bootstrap], logLevel: logLevel.NOTHING }).admin();
  await admin.connect();
  await admin.createTopics({ topics: [{ topic: TOPIC, numPartitions: PARTITIONS }], waitForLeaders: true });
  await admin.disconnect();
}

async function produce(bootstrap: string): Promise<void> {
  const script = fileURLToPath(new URL("./feature-producer.py", import.meta.url));
  const args = [
    bootstrap,
    TOPIC,
    String(PARTITIONS),
    String(events),
    String(features),
    values.codec,
    values.seed,
    values.rate,
  ];
  const child = spawn(await confluentPython(), [script, ...args], {
    stdio: ["ignore", "inherit", "inherit"],
  });
  const [code] = await once(child, "close");
  if (code !== 0) throw new Error(`the producer ended with ${code}`);
}

/** Each reading starts in a fresh process: no contender runs on another's warm code or full heap. */
async function readInOwnProcess(contender: Contender, bootstrap: string): Promise<Reading> {
  const script = fileURLToPath(import.meta.url);
  const options = ["--contender", contender, "--bootstrap", bootstrap, "--events", String(events)];
  const args = ["--import", "tsx", script, ...options, "--features", String(features)];
  const child = spawn(process.execPath, args, { stdio: ["ignore", "pipe", "inherit"] });
  let stdout = "";
  child.stdout.on("data", (chunk: Buffer) => {
    stdout += chunk.toString();
  });
  const [code] = await once(child, "close");
  if (code !== 0) throw new Error(`${contender} ended with ${code}`);
  return JSON.parse(stdout.trim().split("\n").at(-1)!) as Reading;
}

function perEvent(ms: number): number {
  return Math.round((ms / events) * 1e5) / 100;
}

function median(numbers: readonly number[]): number {
  return [...numbers].sort((a, b) => a - b)[Math.floor(numbers.length / 2)]!;
}

function say(line: string): void {
  process.stderr.write(`${line}\n`);
}
