import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { Writable } from "node:stream";
import { readPairs } from "@moorline/answers";
import { buildBaseline } from "@moorline/baseline";
import { startCollector } from "@moorline/collector";
import { type MoorlineConfig, parseConfig } from "@moorline/config";
import { startEvaluator } from "@moorline/evaluator";
import { NumericSketch } from "@moorline/sketch";
import type { NumericComparison } from "@moorline/stats";
import { openStore, type Store } from "@moorline/store";
import { createTelemetry } from "@moorline/telemetry";
import { readRange } from "@moorline/windows";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { until } from "../../services/collector/test/collected.js";
import { readFlights } from "../fixtures/flights.js";
import { type RunningKafka, startKafka } from "../real-parts/index.js";
import { holdAgainstRows, type Measured } from "./against-brute-force.js";
import { batchCodecs } from "./batch-codecs.js";
import { rawKs, rawOf } from "./brute-force.js";
import { type Codec, KafkaBench } from "./kafka-bench.js";

// Real rows (source: fixtures/flights.ts) through a real broker, by a producer that is not ours, in each codec in turn, collected, evaluated and asked
// for; every answer against brute force on the raw rows. Not covered: faults (chaos), several collectors (journeys/two-owners).

const FEATURES = ["delay", "distance", "time", "hour", "rate"] as const;
const SLICES = ["all", "haul=long", "haul=short"] as const;
/** Few distinct values: exact in every sketch, whatever the order. */
const ALWAYS_EXACT: readonly string[] = ["delay", "hour"];
const CODECS: readonly Codec[] = ["none", "gzip", "snappy", "lz4", "zstd"];
const PARTITIONS = 6;
const HOUR_MS = 3_600_000;
/** Event time from one flight to the next: 200,000 flights last three hours and twenty minutes. */
const STEP_MS = 60;

/** The columns of the file, and two made from them: `hour` has 24 distinct values, `rate` (minutes of delay per mile) some 44,000. */
const flights = readFlights().map((row) => ({
  ...row,
  hour: Math.floor(row.time),
  rate: row.delay / row.distance,
  haul: row.distance > 1_000 ? "long" : "short",
}));
type Row = (typeof flights)[number];
/** The file is in the order of the time of day: training is its first half, the flights until about noon; production is the whole day. */
const training = flights.slice(0, flights.length / 2);
const baseMs = Math.floor((Date.now() - 24 * HOUR_MS) / HOUR_MS) * HOUR_MS;
const endMs = baseMs + flights.length * STEP_MS;

let broker: RunningKafka;
let bench: KafkaBench;
let folder: string;

beforeAll(async () => {
  broker = await startKafka({ own: true });
  bench = await KafkaBench.connect(broker.bootstrap);
  folder = await mkdtemp(join(tmpdir(), "moorline-flights-"));
  const columns = [...FEATURES, "haul"] as const;
  const lines = training.map((row) => columns.map((column) => row[column]).join(","));
  await writeFile(join(folder, "training.csv"), `${[columns.join(","), ...lines].join("\n")}\n`);
});

afterAll(async () => {
  await bench?.close();
  await broker?.stop();
  if (folder !== undefined) await rm(folder, { recursive: true, force: true });
});

function configFor(codec: Codec): MoorlineConfig {
  return parseConfig(`store: sqlite:${join(folder, `${codec}.db`)}
collector: { port: 0, checkpoint: 1s }
evaluator: { port: 0 }
streams:
  - name: flights
    source: { kafka: { brokers: ["${broker.bootstrap}"], topics: [flights-${codec}], group: flights-${codec} } }
    payload: { format: json, eventTime: at, eventTimeUnit: ms }
    slices: [haul]
    features: [${FEATURES.map((name) => `{ name: ${name}, path: ${name} }`).join(", ")}]
    horizons: [1h]
    lateness: 1m
    idleAfter: 2s
`);
}

async function produceFlights(codec: Codec): Promise<void> {
  const topic = `flights-${codec}`;
  await bench.makeTopic(topic, PARTITIONS);
  const records = flights.map((row, index) => ({
    partition: index % PARTITIONS,
    value: JSON.stringify({ at: baseMs + index * STEP_MS, ...row }),
  }));
  await bench.produce(topic, codec, records);
}

/**
 * The broker holds every row, in the codec asked for. librdkafka sends a batch that a codec would not make smaller as it is: one that was sent with a
 * row or two in it, at the start.
 */
async function holdCodec(codec: Codec): Promise<void> {
  const found = await batchCodecs(broker.dataDir, `flights-${codec}`);
  console.info("on the broker's disk:", found);
  const recordsIn = (name: string) => found[name]?.records ?? 0;
  const inCodec = recordsIn(codec);
  expect(Object.keys(found).filter((name) => name !== codec && name !== "none")).toEqual([]);
  expect(inCodec + (codec === "none" ? 0 : recordsIn("none"))).toBe(flights.length);
  expect(inCodec).toBeGreaterThanOrEqual(0.999 * flights.length);
}

async function setBaseline(store: Store, config: MoorlineConfig): Promise<string> {
  const request = { from: join(folder, "training.csv"), createdBy: "a journey", createdAtMs: Date.now() };
  const { record, parts } = await buildBaseline({ stream: config.streams[0]!, ...request });
  await store.baselines.put(record, parts);
  await store.baselines.activate("flights", record.id, "a journey", Date.now());
  return record.id;
}

/** Collects and evaluates until every record is counted and no pane waits. */
async function collectAndEvaluate(config: MoorlineConfig, store: Store): Promise<void> {
  const logDestination = new Writable({ write: (_chunk, _encoding, done) => done() });
  const telemetry = createTelemetry({ service: "journey", logDestination });
  const services = [
    await startCollector({ config, store, telemetry }),
    await startEvaluator({ config, store, telemetry }),
  ];
  try {
    const everythingDone = async () => {
      const partitions = await store.ingest.partitions("flights");
      const read = partitions.reduce((sum, row) => sum + row.nextOffset, 0);
      return read === flights.length && (await store.panes.pendingPanes("flights")).length === 0;
    };
    await until("every record is counted and every pane rolled up", everythingDone, 120_000);
  } finally {
    for (const service of services) await service.stop();
  }
}

async function measure(
  store: Store,
  config: MoorlineConfig,
  feature: (typeof FEATURES)[number],
  slice: string,
): Promise<Measured> {
  const stream = config.streams[0]!;
  const answer = await readPairs({
    store,
    stream,
    feature: stream.features.find((one) => one.name === feature)!,
    slice,
    range: { fromMs: baseMs, toMs: endMs },
    against: null,
    baseline: null,
    nowMs: Date.now(),
  });
  expect(answer.baseline!.slice).toBe(slice);
  const [part] = await store.baselines.parts(answer.baseline!.id, { slice, feature, block: -1 });
  const query = { stream: "flights", feature, slice, fromMs: baseMs, toMs: endMs, paneMs: stream.paneMs };
  const { sketch } = await readRange(store, { ...query, closedThroughMs: endMs });
  const rowsOf = (rows: readonly Row[]) =>
    rawOf(rows.filter((row) => slice === "all" || slice === `haul=${row.haul}`).map((row) => row[feature]));
  return holdAgainstRows(
    answer,
    { raw: rowsOf(training), sketch: NumericSketch.decode(part!.body) },
    { raw: rowsOf(flights), sketch: sketch! },
  );
}

/** What the evaluator wrote of a window, not asked for again: the second hour, whose delays are exact. */
async function holdEvaluation(store: Store, baselineId: string): Promise<void> {
  const [fromMs, toMs] = [baseMs + HOUR_MS, baseMs + 2 * HOUR_MS];
  const rows = flights.slice(HOUR_MS / STEP_MS, (2 * HOUR_MS) / STEP_MS).map((row) => row.delay);
  const query = { stream: "flights", feature: "delay", slice: "all", horizon: "1h", baselineId };
  const found = await store.evaluations.evaluations({ ...query, fromMs: toMs - 1, toMs });
  expect(found).toMatchObject([{ windowStartMs: fromMs, windowEndMs: toMs, events: rows.length }]);
  const { ks } = found[0]!.comparison as NumericComparison;
  const expected = rawKs(rawOf(training.map((row) => row.delay)), rawOf(rows));
  expect(Math.abs(ks!.distance - expected)).toBeLessThanOrEqual(1e-12);
}

describe("200,000 real flights through a real broker", () => {
  it.each(CODECS)(
    "in %s: counts equal the file's; KS, W1, pairs and tails equal brute force",
    async (codec) => {
      await produceFlights(codec);
      await holdCodec(codec);
      const config = configFor(codec);
      if (config.store.kind !== "sqlite") throw new Error("this journey is on SQLite");
      const store = await openStore(config.store);
      try {
        const baselineId = await setBaseline(store, config);
        await collectAndEvaluate(config, store);
        expect(await store.audit()).toMatchObject({
          clean: true,
          findings: [],
          streams: [{ events: flights.length, deadLetters: 0 }],
        });
        const measured: Measured[] = [];
        for (const slice of SLICES) {
          for (const feature of FEATURES) measured.push(await measure(store, config, feature, slice));
        }
        console.table(measured);
        const exactHere = (row: Measured) => ALWAYS_EXACT.includes(row.feature);
        expect(measured.filter((row) => exactHere(row) && !row.exact)).toEqual([]);
        expect(measured.filter((row) => row.feature === "rate" && row.exact)).toEqual([]);
        await holdEvaluation(store, baselineId);
      } finally {
        await store.close();
      }
    },
  );
});
