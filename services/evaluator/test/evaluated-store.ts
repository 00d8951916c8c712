import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { Writable } from "node:stream";
import { type MoorlineConfig, parseConfig } from "@moorline/config";
import { NumericSketch } from "@moorline/sketch";
import { freezeThresholds } from "@moorline/stats";
import { encodeSegmentBody, openStore, type Store } from "@moorline/store";
import { createTelemetry, type Telemetry } from "@moorline/telemetry";
import { StreamEvaluator } from "../src/stream-evaluator.js";

export const MINUTE = 60_000;
export const BASELINE_ID = "a".repeat(64);
/** An hour's start, so that minutes after it are easy to read. */
export const START = Date.UTC(2026, 0, 5, 10);

export const SETTLE_MS = 30_000;

/** Training: 0 to 999, each ten times, so that 1 % of it lies above 989. */
export const TRAINING = Array.from({ length: 10_000 }, (_, i) => i % 1_000);

/** A store with a stream, and a clock that tests set; segments are written as a collector would. */
export class EvaluatedStore {
  readonly store: Store;
  readonly config: MoorlineConfig;
  readonly telemetry: Telemetry;
  nowMs = START;
  readonly #folder: string;
  #epoch = 0;
  #offset = 0;

  private constructor(folder: string, store: Store, config: MoorlineConfig) {
    this.#folder = folder;
    this.store = store;
    this.config = config;
    const quiet = new Writable({ write: (_chunk, _encoding, done) => done() });
    this.telemetry = createTelemetry({ service: "evaluator", logDestination: quiet });
  }

  static async open(): Promise<EvaluatedStore> {
    const folder = mkdtempSync(join(tmpdir(), "moorline-evaluator-"));
    const path = join(folder, "moorline.db");
    const config = parseConfig(`store: sqlite:${path}
streams:
  - name: s
    source: { kafka: { brokers: ["127.0.0.1:9"], topics: [t], group: g } }
    payload: { format: json, eventTime: at }
    slices: [depot]
    features: [{ name: f, path: f }]
    horizons: [5m, 1h]
    lateness: 1m
    idleAfter: 5m
    silentAfter: 10m
`);
    const opened = new EvaluatedStore(folder, await openStore({ kind: "sqlite", path }), config);
    const claim = await opened.store.ingest.claimPartition({
      stream: "s",
      topic: "t",
      partition: 0,
      owner: "test",
      startOffset: 0,
      sourceId: "test",
      atMs: START,
    });
    opened.#epoch = claim.epoch;
    return opened;
  }

  async setBaseline(id = BASELINE_ID): Promise<void> {
    const sketch = new NumericSketch({ compression: 500, thresholds: { id, values: thresholds() } });
    sketch.addColumn(Float64Array.from(TRAINING));
    const record = { id, stream: "s", createdAtMs: START, createdBy: "test", note: "", manifest: {} };
    await this.store.baselines.put(record, [
      { slice: "all", feature: "f", block: -1, body: sketch.encode() },
    ]);
    await this.store.baselines.activate("s", id, "test", this.nowMs);
  }

  /** One checkpoint with the values of one pane, `minute` minutes after START, in slice `all` and a depot. */
  async events(minute: number, values: readonly number[], depot = "north", id = BASELINE_ID): Promise<void> {
    const body = () => {
      const sketch = new NumericSketch({ thresholds: { id, values: thresholds() } });
      sketch.addColumn(Float64Array.from(values));
      return encodeSegmentBody([["f", sketch.encode()]]);
    };
    const paneStartMs = START + minute * MINUTE;
    const segment = (slice: string) => ({ paneStartMs, slice, events: values.length, body: body() });
    const outcome = await this.store.ingest.commitCheckpoint({
      stream: "s",
      topic: "t",
      partition: 0,
      owner: "test",
      epoch: this.#epoch,
      fromOffset: this.#offset,
      toOffset: this.#offset + values.length,
      gaps: [],
      events: values.length,
      lateEvents: 0,
      deadLetters: {},
      maxEventMs: paneStartMs + MINUTE - 1,
      segments: [segment("all"), segment(`depot=${depot}`)],
      atMs: this.nowMs,
    });
    if (outcome.outcome !== "committed") throw new Error("the test's checkpoint was fenced");
    this.#offset += values.length;
  }

  evaluator(owner = "one"): StreamEvaluator {
    const { store, telemetry } = this;
    return new StreamEvaluator({
      stream: this.config.streams[0]!,
      store,
      telemetry,
      owner,
      settleMs: SETTLE_MS,
      nowMs: () => this.nowMs,
    });
  }

  /** Ticks until there is nothing more to do. */
  async settle(evaluator: StreamEvaluator): Promise<void> {
    while (await evaluator.tick()) {}
  }

  async close(): Promise<void> {
    await this.store.close();
    rmSync(this.#folder, { recursive: true, force: true });
  }
}

function thresholds(): number[] {
  const sketch = new NumericSketch();
  sketch.addColumn(Float64Array.from(TRAINING));
  return freezeThresholds(sketch.toCdf()).map((one) => one.value);
}
