// measure:memory – resident memory of `moorline run` (collector, evaluator and gateway in one process, SQLite) while 1,000 features
// in 4 slices come at 2,000 events/s from a real broker for 10 minutes. Talks on stderr; the last line of stdout is one JSON object.
import { spawn } from "node:child_process";
import { once } from "node:events";
import { mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { fileURLToPath } from "node:url";
import { openStore } from "@moorline/store";
import { Kafka, logLevel } from "kafkajs";
import { confluentPython, startKafka } from "../real-parts/index.js";

const FEATURES = Number(process.env["MOORLINE_MEMORY_FEATURES"] ?? 1_000);
const SLICES = 4;
const RATE = Number(process.env["MOORLINE_MEMORY_RATE"] ?? 2_000);
const SECONDS = Number(process.env["MOORLINE_MEMORY_SECONDS"] ?? 600);
const TOPIC = "wide-features";
const GATEWAY_PORT = 27_460;
const main = fileURLToPath(new URL("../../services/cli/dist/main.js", import.meta.url));
const log = (line: string) => process.stderr.write(`${line}\n`);

const folder = await mkdtemp(join(tmpdir(), "moorline-memory-"));
const kafka = await startKafka({
  extraConfig: { "log.retention.bytes": "1000000000", "log.retention.check.interval.ms": "5000" },
});
try {
  const admin = new Kafka({ brokers: [kafka.bootstrap], logLevel: logLevel.NOTHING }).admin();
  await admin.connect();
  await admin.createTopics({ topics: [{ topic: TOPIC, numPartitions: 2 }], waitForLeaders: true });
  await admin.disconnect();
  await writeFile(join(folder, "moorline.yaml"), config(kafka.bootstrap));
  const child = spawn(
    process.execPath,
    [
      ...(process.env["MOORLINE_MEMORY_NODE_FLAGS"]?.split(" ") ?? []),
      main,
      "run",
      "--config",
      join(folder, "moorline.yaml"),
    ],
    {
      cwd: folder,
      stdio: ["ignore", "ignore", "inherit"],
    },
  );
  await sleep(5_000);
  const producer = startProducer(kafka.bootstrap);
  const samples = await residentMegabytes(child.pid!, SECONDS);
  const produced = JSON.parse(await producer) as { sent: number; bytesPerEvent: number; seconds: number };
  await sleep(10_000);
  const counted = await countedEvents(join(folder, "moorline.db"));
  child.kill("SIGINT");
  await once(child, "exit");
  const third = Math.floor(samples.length / 3);
  const [first, second, last] = [0, 1, 2].map((k) => mean(samples.slice(k * third, (k + 1) * third))) as [
    number,
    number,
    number,
  ];
  process.stdout.write(
    `${JSON.stringify({
      measure: "memory",
      features: FEATURES,
      slices: SLICES,
      eventsPerSecondAsked: RATE,
      eventsPerSecondProduced: Math.round(produced.sent / produced.seconds),
      bytesPerEvent: produced.bytesPerEvent,
      seconds: SECONDS,
      produced: produced.sent,
      counted,
      residentMegabytes: {
        first: Math.round(first),
        second: Math.round(second),
        last: Math.round(last),
        peak: Math.round(Math.max(...samples)),
      },
      lastToSecond: Math.round((last / second) * 1_000) / 1_000,
      flat: Math.abs(last / second - 1) <= 0.05,
      node: process.version,
    })}\n`,
  );
} finally {
  await kafka.stop();
  await rm(folder, { recursive: true, force: true });
}

function config(bootstrap: string): string {
  const features = Array.from({ length: FEATURES }, (_, f) => `      - { name: f${f}, path: f${f} }`).join(
    "\n",
  );
  return `store: sqlite:${join(folder, "moorline.db")}
gateway: { port: ${GATEWAY_PORT} }
streams:
  - name: wide
    source: { kafka: { brokers: ["${bootstrap}"], topics: [${TOPIC}], group: moorline-memory } }
    payload: { format: json }
    slices: [s]
    horizons: [5m]
    lateness: 10s
    features:
${features}
`;
}

async function startProducer(bootstrap: string): Promise<string> {
  const script = fileURLToPath(new URL("./wide-producer.py", import.meta.url));
  const args = [bootstrap, TOPIC, FEATURES, SLICES, RATE, SECONDS].map(String);
  const child = spawn(await confluentPython(), [script, ...args], { stdio: ["ignore", "pipe", "inherit"] });
  let stdout = "";
  child.stdout.on("data", (chunk: Buffer) => {
    stdout += chunk.toString();
  });
  const [code] = (await once(child, "close")) as [number | null];
  if (code !== 0) throw new Error(`the producer failed with ${code}`);
  return stdout.trim();
}

async function residentMegabytes(pid: number, seconds: number): Promise<number[]> {
  const samples: number[] = [];
  for (let second = 0; second < seconds; second++) {
    const status = await readFile(`/proc/${pid}/status`, "utf8");
    samples.push(Number(/^VmRSS:\s+(\d+) kB$/m.exec(status)?.[1] ?? 0) / 1_024);
    if (second % 15 === 0) log(`${second} s: ${samples.at(-1)!.toFixed(0)} MB resident`);
    await sleep(1_000);
  }
  return samples;
}

async function countedEvents(path: string): Promise<number> {
  const store = await openStore({ kind: "sqlite", path });
  try {
    return (await store.ingest.partitions("wide")).reduce((sum, row) => sum + row.events, 0);
  } finally {
    await store.close();
  }
}

function mean(values: readonly number[]): number {
  return values.reduce((a, b) => a + b, 0) / values.length;
}
