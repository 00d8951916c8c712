import { setTimeout as sleep } from "node:timers/promises";
import type { KafkaSourceConfig } from "@moorline/config";
import { isMoorlineError } from "@moorline/errors";
import type { Admin, Consumer, EachBatchPayload, Kafka } from "kafkajs";
import type { PartitionOpening, SourceSink, Verdict } from "../source.js";
import { within } from "../within.js";
import { HeartbeatControl } from "./heartbeat-control.js";
import { isKafkaError, kafkaAway } from "./kafka-client.js";
import { type LogEnds, LogEndsReader } from "./log-ends.js";
import { OffsetCourtesy } from "./offset-courtesy.js";
import { ReadReach } from "./read-reach.js";
import { toSourceBatch } from "./to-source-batch.js";

/** Also how long a pause, a resume or a stop may take to be noticed. */
const MAX_WAIT_MS = 300;
const LONGEST_HEARTBEAT_INTERVAL_MS = 3_000;
const CONCURRENT_PARTITIONS = 3;
/** New partitions of a topic are seen after at most this time. */
const METADATA_MAX_AGE_MS = 30_000;
const LAG_EVERY_MS = 10_000;
const CLOSE_WITHIN_MS = 5_000;
const MOST_FENCE_DOUBLINGS = 3;
/** A batch that is dropped is fetched again at once: not in a tight loop. */
const DROP_PAUSE_MS = 100;
/** Share of the session timeout that a last checkpoint may take before partitions go to others. */
const LAST_CHECKPOINT_SHARE = 0.25;

interface Assigned {
  readonly topic: string;
  readonly partition: number;
  halted: boolean;
  /** How often it was fenced since its last checkpoint. */
  fences: number;
}

/**
 * One kafkajs consumer from its start to its crash or close. What it knows of ownership belongs to one generation of the group:
 * GROUP_JOIN begins a new one, and whatever was asked for in an older one is dropped when its answer comes.
 */
export class ConsumerSession {
  readonly #config: KafkaSourceConfig;
  readonly #sink: SourceSink;
  readonly #consumer: Consumer;
  readonly #admin: Admin;
  readonly #courtesy: OffsetCourtesy;
  readonly #ends: LogEndsReader;
  readonly #reach = new ReadReach();
  readonly #assigned = new Map<string, Assigned>();
  readonly #heartbeatIntervalMs: number;
  readonly #onOpened: () => void;
  readonly #onFatal: (error: unknown) => void;
  readonly #crash: { reject(error: unknown): void };
  #clusterId = "";
  #generation = 0;
  #settling: Promise<void> = Promise.resolve();
  #handlers = 0;
  #stopping = false;
  #lagTimer: NodeJS.Timeout | null = null;
  /** Rejects when the consumer is dead and a new session is needed. */
  readonly crashed: Promise<never>;

  constructor(
    kafka: Kafka,
    config: KafkaSourceConfig,
    sink: SourceSink,
    listener: { onOpened(): void; onFatal(error: unknown): void },
  ) {
    this.#config = config;
    this.#sink = sink;
    this.#onOpened = listener.onOpened;
    this.#onFatal = listener.onFatal;
    this.#heartbeatIntervalMs = Math.min(
      LONGEST_HEARTBEAT_INTERVAL_MS,
      Math.floor(config.sessionTimeoutMs / 5),
    );
    let crash = { reject: (_: unknown) => {} };
    this.crashed = new Promise<never>((_, reject) => {
      crash = { reject };
    });
    this.crashed.catch(() => {});
    this.#crash = crash;
    this.#admin = kafka.admin();
    this.#ends = new LogEndsReader(this.#admin, config);
    this.#consumer = kafka.consumer({
      groupId: config.group,
      sessionTimeout: config.sessionTimeoutMs,
      rebalanceTimeout: config.sessionTimeoutMs * 2,
      heartbeatInterval: this.#heartbeatIntervalMs,
      metadataMaxAge: METADATA_MAX_AGE_MS,
      maxWaitTimeInMs: MAX_WAIT_MS,
      allowAutoTopicCreation: false,
    });
    this.#courtesy = new OffsetCourtesy(this.#consumer);
  }

  async start(): Promise<void> {
    const { events } = this.#consumer;
    this.#consumer.on(events.REBALANCING, () => this.#lose());
    this.#consumer.on(events.GROUP_JOIN, ({ payload }) => this.#join(payload.memberAssignment));
    this.#consumer.on(events.CRASH, ({ payload }) => this.#crash.reject(payload.error));
    this.#consumer.on(events.START_BATCH_PROCESS, ({ payload }) => {
      const { topic, partition, batchSize, lastOffset } = payload;
      if (batchSize === 0) this.#reach.passOver(topic, partition, Number(lastOffset) + 1);
    });
    await this.#step(() => this.#admin.connect());
    this.#clusterId = (await this.#step(() => this.#admin.describeCluster())).clusterId;
    await this.#step(() => this.#consumer.connect());
    await this.#step(() =>
      this.#consumer.subscribe({ topics: [...this.#config.topics], fromBeginning: true }),
    );
    await this.#step(() => this.#run());
    this.#lagTimer = setInterval(() => void this.#reportEnds(), LAG_EVERY_MS);
  }

  #run(): Promise<void> {
    return this.#consumer.run({
      autoCommit: false,
      eachBatchAutoResolve: false,
      partitionsConsumedConcurrently: CONCURRENT_PARTITIONS,
      eachBatch: (payload) => this.#counted(() => this.#eachBatch(payload)),
    });
  }

  /** A session closed while it starts must not come to life later, as a member of the group that nobody knows. */
  async #step<T>(action: () => Promise<T>): Promise<T> {
    if (this.#stopping) throw kafkaAway(this.#config, "closed while starting");
    const result = await action();
    if (this.#stopping) await this.#disconnect();
    return result;
  }

  #disconnect(): Promise<unknown> {
    return Promise.allSettled([this.#consumer.disconnect(), this.#admin.disconnect()]);
  }

  fail(error: unknown): void {
    this.#crash.reject(error);
  }

  committed(topic: string, partition: number, nextOffset: number): void {
    const assigned = this.#assigned.get(nameOf(topic, partition));
    if (assigned === undefined) return;
    assigned.fences = 0;
    this.#courtesy.note(topic, partition, nextOffset);
  }

  /** No more batches are taken; those at work come to their end. */
  async quiesce(): Promise<void> {
    this.#stopping = true;
    if (this.#assigned.size > 0) this.#consumer.pause(this.#config.topics.map((topic) => ({ topic })));
    while (this.#handlers > 0) await sleep(10);
  }

  /** Leaves the group and closes connections, in bounded time. */
  async close(): Promise<void> {
    this.#stopping = true;
    this.#generation++;
    if (this.#lagTimer !== null) clearInterval(this.#lagTimer);
    await within(CLOSE_WITHIN_MS / 2, this.#courtesy.send());
    this.#courtesy.clear();
    await within(CLOSE_WITHIN_MS, this.#disconnect());
  }

  // ---- ownership --------------------------------------------------------------------------------------------------

  #lose(): void {
    this.#generation++;
    this.#assigned.clear();
    this.#reach.clear();
    this.#courtesy.clear();
    this.#sink.releaseAll();
  }

  #join(assignment: Record<string, number[]>): void {
    this.#lose();
    for (const [topic, partitions] of Object.entries(assignment)) {
      for (const partition of partitions) {
        this.#assigned.set(nameOf(topic, partition), { topic, partition, halted: false, fences: 0 });
      }
    }
    if (this.#stopping) return;
    this.#consumer.resume(this.#config.topics.map((topic) => ({ topic })));
    const generation = this.#generation;
    this.#settling = this.#openAssigned(generation).catch((error) => {
      if (generation !== this.#generation || this.#stopping) return;
      this.#fatalUnlessAway(error);
    });
  }

  async #openAssigned(generation: number): Promise<void> {
    for (const topic of new Set([...this.#assigned.values()].map((assigned) => assigned.topic))) {
      const ends = await this.#ends.read(topic, () => generation !== this.#generation);
      for (const assigned of [...this.#assigned.values()].filter((a) => a.topic === topic)) {
        if (generation !== this.#generation) return;
        await this.#open(assigned, ends.get(assigned.partition), generation);
      }
    }
    if (generation === this.#generation) this.#onOpened();
  }

  async #open(assigned: Assigned, ends: LogEnds | undefined, generation: number): Promise<void> {
    const { topic, partition } = assigned;
    // A partition that metadata does not show yet is opened at the next join, which its appearance brings.
    if (ends === undefined) return;
    const opening: PartitionOpening = {
      topic,
      partition,
      startOffset: this.#config.start === "latest" ? ends.endOffset : ends.lowOffset,
      ...ends,
      sourceId: this.#clusterId,
    };
    const verdict = await this.#sink.open(opening);
    if (generation === this.#generation) this.#follow(assigned, verdict);
  }

  #follow(assigned: Assigned, verdict: Verdict): void {
    const { topic, partition } = assigned;
    if (verdict.action === "seek") {
      this.#reach.set(topic, partition, verdict.offset);
      this.#consumer.seek({ topic, partition, offset: String(verdict.offset) });
    } else if (verdict.action === "halt") {
      assigned.halted = true;
      this.#consumer.pause([{ topic, partitions: [partition] }]);
    }
  }

  // ---- batches ----------------------------------------------------------------------------------------------------

  async #counted(handle: () => Promise<void>): Promise<void> {
    this.#handlers++;
    try {
      await handle();
    } finally {
      this.#handlers--;
    }
  }

  async #eachBatch({ batch, heartbeat, resolveOffset, isStale }: EachBatchPayload): Promise<void> {
    const generation = this.#generation;
    const { topic, partition } = batch;
    const assigned = this.#assigned.get(nameOf(topic, partition));
    const control = new HeartbeatControl(heartbeat, () => this.#lowOffset(topic, partition));
    const isOld = () => generation !== this.#generation || this.#stopping;
    if (assigned === undefined || this.#stopping) return;

    try {
      await this.#settled(control);
      if (isOld() || isStale() || assigned.halted) return;
      const source = toSourceBatch(batch, this.#reach);
      const verdict = await this.#sink.take(source, control);
      if (isOld()) return;
      if (verdict.action === "read-on") {
        resolveOffset(batch.lastOffset());
        this.#reach.set(topic, partition, source.toOffset);
        await control.heartbeat();
      } else if (verdict.action === "fenced") {
        await this.#reopenAfterFence(assigned, control, generation);
      } else if (verdict.action === "drop") {
        await sleep(DROP_PAUSE_MS);
      } else this.#follow(assigned, verdict);
    } catch (error) {
      await this.#leaveBatch(error, control, isOld);
    }
  }

  /** Claims of a new assignment hang on store and broker: ownership is kept meanwhile. */
  async #settled(control: HeartbeatControl): Promise<void> {
    let done = false;
    const settling = this.#settling.finally(() => {
      done = true;
    });
    while (!done) {
      await Promise.race([settling, sleep(this.#heartbeatIntervalMs)]);
      if (!done) await control.heartbeat();
    }
  }

  /**
   * Another epoch has the partition. A heartbeat (sent only after its interval) tells whether we are still in the group: a zombie gets
   * an error and rejoins, a rightful owner claims again. Two owners that both pass would take it from each other for ever: the wait grows.
   */
  async #reopenAfterFence(assigned: Assigned, control: HeartbeatControl, generation: number): Promise<void> {
    const most = 2 ** Math.min(assigned.fences++, MOST_FENCE_DOUBLINGS);
    for (let waits = Math.ceil(most * (0.5 + Math.random() / 2)); waits > 0; waits--) {
      await sleep(this.#heartbeatIntervalMs + 50);
      await control.heartbeat();
      if (generation !== this.#generation || this.#stopping) return;
    }
    const ends = await this.#ends.read(assigned.topic, () => generation !== this.#generation);
    await this.#open(assigned, ends.get(assigned.partition), generation);
  }

  /** A lost heartbeat goes to kafkajs, which rejoins; what was counted is written first if that is quick. Nothing else may reach it. */
  async #leaveBatch(error: unknown, control: HeartbeatControl, isOld: () => boolean): Promise<void> {
    if (control.threw(error)) {
      const withinMs = this.#config.sessionTimeoutMs * LAST_CHECKPOINT_SHARE;
      if (!isOld()) await within(withinMs, this.#sink.flush());
      throw error;
    }
    if (!isOld()) this.#fatalUnlessAway(error);
  }

  #fatalUnlessAway(error: unknown): void {
    if (isKafkaError(error) || (isMoorlineError(error) && error.code === "MOORLINE_UPSTREAM_KAFKA")) {
      this.#crash.reject(error);
      return;
    }
    // What was counted may be wrong now: nothing more is taken, and nothing of it is written.
    this.#stopping = true;
    this.#sink.releaseAll();
    this.#consumer.pause(this.#config.topics.map((topic) => ({ topic })));
    this.#onFatal(error);
  }

  // ---- log ends ---------------------------------------------------------------------------------------------------

  async #lowOffset(topic: string, partition: number): Promise<number> {
    const ends = await this.#ends.read(topic, () => this.#stopping);
    return ends.get(partition)?.lowOffset ?? 0;
  }

  async #reportEnds(): Promise<void> {
    for (const topic of this.#config.topics) {
      const ends = await this.#ends.readOnce(topic).catch(() => new Map<number, LogEnds>());
      for (const [partition, { endOffset }] of ends) {
        if (this.#assigned.has(nameOf(topic, partition))) this.#sink.reportEnd(topic, partition, endOffset);
      }
    }
  }
}

function nameOf(topic: string, partition: number): string {
  return `${partition}/${topic}`;
}
