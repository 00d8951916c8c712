import { setTimeout as sleep } from "node:timers/promises";
import type { KafkaSourceConfig } from "@moorline/config";
import type { Kafka } from "kafkajs";
import type { CollectorReports } from "../collector-reports.js";
import type { Source, SourceSink } from "../source.js";
import { ConsumerSession } from "./consumer-session.js";
import { kafkaAway } from "./kafka-client.js";
import { onUnhandledKafkaFailure } from "./unhandled-failures.js";

const FIRST_WAIT_MS = 500;
const LONGEST_WAIT_MS = 10_000;
const STEP_MS = 100;
/** A dead consumer's claims hold until another one takes them: what it counted is written if that is quick. */
const LAST_CHECKPOINT_MS = 3_000;

/**
 * Kafka topics through kafkajs, under a supervisor: a consumer that crashes is thrown away, what it had claimed is released, and a new
 * one is made after a growing wait. The store holds the offsets, so nothing but time is lost by that.
 */
export class KafkaSource implements Source {
  readonly #kafka: Kafka;
  readonly #config: KafkaSourceConfig;
  readonly #reports: CollectorReports;
  readonly #fail: { reject(error: unknown): void };
  #session: ConsumerSession | null = null;
  #supervisor: Promise<void> = Promise.resolve();
  #stopping = false;
  #failures = 0;
  #leaveUnhandled: () => void = () => {};
  readonly ended: Promise<void>;

  constructor(kafka: Kafka, config: KafkaSourceConfig, reports: CollectorReports) {
    this.#kafka = kafka;
    this.#config = config;
    this.#reports = reports;
    let fail = { reject: (_: unknown) => {} };
    this.ended = new Promise((_, reject) => {
      fail = { reject };
    });
    this.ended.catch(() => {});
    this.#fail = fail;
  }

  async start(sink: SourceSink): Promise<void> {
    this.#leaveUnhandled = onUnhandledKafkaFailure((error) => this.#session?.fail(error));
    this.#supervisor = this.#supervise(sink);
  }

  async quiesce(): Promise<void> {
    this.#stopping = true;
    await this.#session?.quiesce();
  }

  async close(): Promise<void> {
    this.#stopping = true;
    this.#session?.fail(null);
    await this.#supervisor;
    this.#leaveUnhandled();
  }

  committed(topic: string, partition: number, nextOffset: number): void {
    this.#session?.committed(topic, partition, nextOffset);
  }

  async #supervise(sink: SourceSink): Promise<void> {
    while (!this.#stopping) {
      const session = new ConsumerSession(this.#kafka, this.#config, sink, {
        onOpened: () => {
          this.#failures = 0;
          this.#reports.back("source");
        },
        onFatal: (error) => this.#fail.reject(error),
      });
      this.#session = session;
      const error = await Promise.race([session.start().then(() => session.crashed), session.crashed]).catch(
        (e) => e,
      );
      if (!this.#stopping) {
        await Promise.race([sink.flush().catch(() => {}), sleep(LAST_CHECKPOINT_MS)]);
        sink.releaseAll();
      }
      await session.close();
      if (!this.#stopping) await this.#backOff(error);
    }
  }

  async #backOff(error: unknown): Promise<void> {
    const longestMs = Math.min(LONGEST_WAIT_MS, FIRST_WAIT_MS * 2 ** Math.min(this.#failures, 10));
    const waitMs = Math.round(longestMs * (0.5 + Math.random() / 2));
    this.#failures++;
    this.#reports.away("source", kafkaAway(this.#config, error), this.#failures, waitMs);
    for (let left = waitMs; left > 0 && !this.#stopping; left -= STEP_MS) await sleep(STEP_MS);
  }
}
