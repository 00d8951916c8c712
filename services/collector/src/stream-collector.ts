import type { CollectorConfig, StreamConfig } from "@moorline/config";
import { createJsonDecoder, type Decoder } from "@moorline/decode";
import { isMoorlineError } from "@moorline/errors";
import type { Checkpoint, CheckpointOutcome, PartitionKey, Store } from "@moorline/store";
import { BaselineWatch } from "./baseline-watch.js";
import { claimPartition } from "./claim-partition.js";
import type { CollectorReports } from "./collector-reports.js";
import type { DeadLetter, DeadLetterSink } from "./dead-letters.js";
import type { IngestContext } from "./ingest-context.js";
import { PartitionIngest } from "./partition-ingest.js";
import { type RetryPlan, retryUpstream } from "./retry-upstream.js";
import { SliceRegistry } from "./slice-registry.js";
import type { BatchControl, PartitionOpening, Source, SourceBatch, SourceSink, Verdict } from "./source.js";

export interface StreamCollectorParts {
  readonly stream: StreamConfig;
  readonly limits: CollectorConfig;
  readonly owner: string;
  readonly store: Store;
  readonly deadLetters: DeadLetterSink;
  readonly source: Source;
  readonly reports: CollectorReports;
  readonly nowMs: () => number;
}

/** How often partitions are looked at for checkpoints that are due, and the active baseline is looked up. */
const TICK_MS = 250;
const BASELINE_EVERY_MS = 3_000;
/** How long a stop waits for a store that is away. What is not written by then is read again at the next start. */
const STOP_WITHIN_MS = 10_000;

const DROP: Verdict = { action: "drop" };
const FENCED: Verdict = { action: "fenced" };

/** One stream's claims, guard, checkpoints and fence, whichever source it has. */
export class StreamCollector implements SourceSink, IngestContext {
  readonly stream: StreamConfig;
  readonly owner: string;
  readonly limits: CollectorConfig;
  readonly sketchOptions: BaselineWatch;
  readonly decoder: Decoder;
  readonly nowMs: () => number;
  readonly #parts: StreamCollectorParts;
  readonly #ingests = new Map<string, PartitionIngest>();
  readonly #fail: (error: unknown) => void;
  #slices: SliceRegistry | null = null;
  #timer: NodeJS.Timeout | null = null;
  #stopDeadlineMs = Infinity;
  #stopping = false;
  #clockMs = 0;
  /** Counts releases: a claim that was asked for before one is not taken up after it. */
  #generation = 0;
  readonly ended: Promise<void>;

  constructor(parts: StreamCollectorParts) {
    this.#parts = parts;
    this.stream = parts.stream;
    this.owner = parts.owner;
    this.limits = parts.limits;
    this.nowMs = parts.nowMs;
    this.sketchOptions = new BaselineWatch(parts.store, parts.stream.name);
    this.decoder = createJsonDecoder(parts.stream, { nowMs: () => this.#clockMs });
    let fail: (error: unknown) => void = () => {};
    const failed = new Promise<never>((_, reject) => {
      fail = reject;
    });
    this.#fail = fail;
    this.ended = Promise.race([parts.source.ended, failed]);
    this.ended.catch(() => {});
  }

  get slices(): SliceRegistry {
    return this.#slices!;
  }

  async start(): Promise<void> {
    const plan = this.#plan("store", () => this.#stopping);
    const seen = await retryUpstream(() => this.#parts.store.panes.slices(this.stream.name), plan);
    await retryUpstream(() => this.sketchOptions.refresh(), plan);
    this.#parts.reports.back("store");
    const keys = this.stream.slices.map((slice) => slice.key);
    this.#slices = new SliceRegistry(keys, this.stream.sliceLimit, seen, (key) =>
      this.#parts.reports.sliceLimitReached(key, this.stream.sliceLimit),
    );
    let baselineAtMs = performance.now();
    this.#timer = setInterval(() => {
      void this.#checkpointDue();
      if (performance.now() - baselineAtMs < BASELINE_EVERY_MS) return;
      baselineAtMs = performance.now();
      void this.#refreshBaseline();
    }, TICK_MS);
    await this.#parts.source.start(this);
  }

  /** Last checkpoint, then gives the partitions back. */
  async stop(): Promise<void> {
    this.#stopping = true;
    this.#stopDeadlineMs = performance.now() + STOP_WITHIN_MS;
    if (this.#timer !== null) clearInterval(this.#timer);
    await this.#parts.source.quiesce();
    await this.flush();
    await this.#parts.source.close();
    this.releaseAll();
    await this.#parts.deadLetters.close();
  }

  // ---- SourceSink -------------------------------------------------------------------------------------------------

  async open(opening: PartitionOpening): Promise<Verdict> {
    const generation = this.#generation;
    const { topic, partition } = opening;
    const key: PartitionKey = { stream: this.stream.name, topic, partition };
    this.#ingests.get(nameOf(key))?.release();

    const isOver = () => generation !== this.#generation || this.#stopping;
    let ingest: PartitionIngest | Verdict;
    try {
      ingest = await retryUpstream(() => this.#claim(key, opening), this.retryPlan(key, isOver));
    } catch (error) {
      if (isOver()) return DROP;
      throw error;
    }
    this.#parts.reports.back("store");
    if (!(ingest instanceof PartitionIngest)) return ingest;
    if (isOver()) return DROP;

    this.#ingests.set(nameOf(key), ingest);
    this.#parts.reports.opened(key, ingest.epoch, ingest.position);
    this.#parts.reports.lag(key, ingest.lag);
    return { action: "seek", offset: ingest.position };
  }

  async take(batch: SourceBatch, control: BatchControl): Promise<Verdict> {
    const ingest = this.#ingests.get(nameOf({ stream: this.stream.name, ...batch }));
    if (this.#stopping) return DROP;
    // The timer's checkpoint found it fenced: the source has to hear of it.
    if (ingest === undefined) return FENCED;
    const verdict = await this.#surely(ingest, () => ingest.take(batch, control));
    if (!ingest.released) this.#parts.reports.lag(ingest.key, ingest.lag);
    return verdict;
  }

  async flush(): Promise<void> {
    const outcomes = await Promise.allSettled(
      [...this.#ingests.values()].map((ingest) => this.#surely(ingest, () => ingest.checkpoint())),
    );
    const failure = outcomes.find((outcome) => outcome.status === "rejected");
    if (failure !== undefined) throw failure.reason;
  }

  releaseAll(): void {
    this.#generation++;
    if (this.#ingests.size > 0) this.#parts.reports.rejoined();
    for (const ingest of this.#ingests.values()) ingest.release();
    this.#ingests.clear();
  }

  async finish(topic: string, partition: number): Promise<void> {
    const ingest = this.#ingests.get(nameOf({ stream: this.stream.name, topic, partition }));
    if (ingest === undefined) return;
    await this.#surely(ingest, () => ingest.checkpoint());
    const { key, epoch } = ingest;
    const detail = `read to its end at ${ingest.position}`;
    const plan = this.retryPlan(key, () => ingest.released);
    await retryUpstream(
      () => this.#parts.store.ingest.setPartitionStatus(key, epoch, "finished", detail, this.nowMs()),
      plan,
    );
  }

  reportEnd(topic: string, partition: number, endOffset: number): void {
    const ingest = this.#ingests.get(nameOf({ stream: this.stream.name, topic, partition }));
    if (ingest === undefined) return;
    ingest.reportEnd(endOffset);
    this.#parts.reports.lag(ingest.key, ingest.lag);
  }

  // ---- IngestContext ----------------------------------------------------------------------------------------------

  lookAtClock(): void {
    this.#clockMs = this.nowMs();
  }

  isStopping(): boolean {
    return this.#stopping;
  }

  overBudget(heldBytes: number): boolean {
    let total = 0;
    for (const ingest of this.#ingests.values()) total += ingest.heldBytes;
    return (
      total > this.limits.checkpointBytes && heldBytes * this.#ingests.size >= this.limits.checkpointBytes
    );
  }

  commitCheckpoint(checkpoint: Checkpoint): Promise<CheckpointOutcome> {
    return this.#parts.store.ingest.commitCheckpoint(checkpoint);
  }

  async sendDeadLetters(letters: readonly DeadLetter[]): Promise<void> {
    if (letters.length > 0) await this.#parts.deadLetters.send(letters);
  }

  retryPlan(_key: PartitionKey, isReleased: () => boolean, control?: BatchControl): RetryPlan {
    const plan = this.#plan("store", isReleased);
    return control === undefined ? plan : { ...plan, meanwhile: () => control.heartbeat() };
  }

  checkpointed(checkpoint: Checkpoint, durationMs: number): void {
    this.#parts.reports.back("store");
    this.#parts.reports.back("dead-letters");
    this.#parts.reports.checkpointed(checkpoint, durationMs);
    this.#parts.source.committed(checkpoint.topic, checkpoint.partition, checkpoint.toOffset);
  }

  noteGap(key: PartitionKey, fromOffset: number, toOffset: number): void {
    this.#parts.reports.gap(key, fromOffset, toOffset);
  }

  async haltRewound(key: PartitionKey, epoch: number, reason: string): Promise<Verdict> {
    const plan = this.retryPlan(key, () => this.#stopping);
    await retryUpstream(
      () => this.#parts.store.ingest.setPartitionStatus(key, epoch, "log-rewound", reason, this.nowMs()),
      plan,
    );
    this.#parts.reports.halted(key, reason);
    return { action: "halt", reason };
  }

  // -----------------------------------------------------------------------------------------------------------------

  async #claim(key: PartitionKey, opening: PartitionOpening): Promise<PartitionIngest | Verdict> {
    const request = { key, opening, owner: this.owner, atMs: this.nowMs() };
    const { claim, maxEventMs, rewound, halted } = await claimPartition(this.#parts.store, request);
    if (rewound !== null) return this.haltRewound(key, claim.epoch, rewound);
    if (halted === null) return new PartitionIngest(key, claim, maxEventMs, opening.endOffset, this);

    this.#parts.reports.halted(key, halted);
    return { action: "halt", reason: halted };
  }

  /** What a lost partition could not finish is no failure: its next owner reads it again. */
  async #surely(ingest: PartitionIngest, action: () => Promise<Verdict>): Promise<Verdict> {
    try {
      const verdict = await action();
      if (verdict.action !== "fenced") return verdict;
      this.#parts.reports.fenced(ingest.key, ingest.epoch);
      if (this.#ingests.get(nameOf(ingest.key)) === ingest) this.#ingests.delete(nameOf(ingest.key));
      return verdict;
    } catch (error) {
      // A stop that cannot wait for a store that is away leaves the rest to the next start.
      const retryable = isMoorlineError(error) && error.retryable;
      if (ingest.released || (this.#stopping && retryable)) return DROP;
      throw error;
    }
  }

  async #checkpointDue(): Promise<void> {
    for (const ingest of [...this.#ingests.values()]) {
      await this.#surely(ingest, () => ingest.checkpointIfDue()).catch((error) => {
        if (!this.#stopping) this.#fail(error);
      });
    }
  }

  async #refreshBaseline(): Promise<void> {
    try {
      if (await this.sketchOptions.refresh())
        this.#parts.reports.baselineChanged(this.sketchOptions.baselineId);
    } catch (error) {
      // The next look is seconds away; checkpoints tell when the store is really away.
      if (isMoorlineError(error) && !error.retryable) this.#fail(error);
    }
  }

  #plan(system: "store" | "dead-letters", isReleased: () => boolean): RetryPlan {
    return {
      onFailure: (error, attempt, waitMs) => {
        const deadLetters = isMoorlineError(error) && error.code === "MOORLINE_UPSTREAM_DEAD_LETTERS";
        this.#parts.reports.away(deadLetters ? "dead-letters" : system, error, attempt, waitMs);
      },
      isOver: () => isReleased() || performance.now() > this.#stopDeadlineMs,
    };
  }
}

function nameOf(key: PartitionKey): string {
  return `${key.partition}/${key.topic}`;
}
