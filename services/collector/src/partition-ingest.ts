import { setTimeout as sleep } from "node:timers/promises";
import type { Decoder } from "@moorline/decode";
import type { Checkpoint, OffsetGap, PartitionClaim, PartitionKey } from "@moorline/store";
import { type DeadLetter, MOST_KEPT_BYTES } from "./dead-letters.js";
import type { IngestContext } from "./ingest-context.js";
import { retryUpstream } from "./retry-upstream.js";
import { SegmentAccumulator } from "./segment-accumulator.js";
import { SerialQueue } from "./serial-queue.js";
import type { BatchControl, SourceBatch, SourceRecords, Verdict } from "./source.js";

/** Records between two looks at the clock, heartbeats and limits. */
const CHUNK_RECORDS = 1000;
/** Dead letters hold payloads: this many bytes of them make a checkpoint due. */
const MOST_DEAD_LETTER_BYTES = 8 * 1024 * 1024;

/** Longest wait for a checkpoint under way between two heartbeats. */
const HEARTBEAT_STEP_MS = 500;

const READ_ON: Verdict = { action: "read-on" };
const DROP: Verdict = { action: "drop" };
const FENCED: Verdict = { action: "fenced" };

/**
 * One claimed partition between two checkpoints.
 *
 * Invariants
 *  1. `position` is the store's next offset plus what was counted here since: every offset below it is in a checkpoint, in the
 *     accumulator or in the dead letters, exactly once.
 *  2. A checkpoint covers [committed offset, position) and is written whole or not at all.
 *  3. Once released or fenced it writes nothing more: what it holds is read again by the next owner.
 */
export class PartitionIngest {
  readonly #context: IngestContext;
  readonly #claim: PartitionClaim;
  readonly #queue = new SerialQueue();
  readonly #accumulator: SegmentAccumulator;
  readonly #decoder: Decoder;
  #position: number;
  #committed: number;
  #maxEventMs: number | null;
  #endOffset: number;
  /** By the monotonic clock: a wall clock that is set must not hold a checkpoint back. */
  #lastCheckpointMs: number;
  #released = false;
  #delta: Delta = emptyDelta();
  /** A checkpoint that has not come through yet: it is written again as it is, before anything else is counted. */
  #frozen: FrozenCheckpoint | null = null;

  constructor(
    readonly key: PartitionKey,
    claim: PartitionClaim,
    maxEventMs: number | null,
    endOffset: number,
    context: IngestContext,
  ) {
    this.#context = context;
    this.#claim = claim;
    this.#position = claim.nextOffset;
    this.#committed = claim.nextOffset;
    this.#maxEventMs = maxEventMs;
    this.#endOffset = endOffset;
    this.#lastCheckpointMs = performance.now();
    this.#accumulator = new SegmentAccumulator(context.stream, context.slices, context.sketchOptions);
    this.#decoder = context.decoder;
  }

  get position(): number {
    return this.#position;
  }

  get epoch(): number {
    return this.#claim.epoch;
  }

  get lag(): number {
    return Math.max(0, this.#endOffset - this.#position);
  }

  get heldBytes(): number {
    if (this.#released) return 0;
    return this.#accumulator.heldBytes + this.#delta.deadLetterBytes + (this.#frozen?.heldBytes ?? 0);
  }

  get released(): boolean {
    return this.#released;
  }

  /** Forgets everything; a checkpoint under way either came through or is fenced by the next claim. */
  release(): void {
    this.#released = true;
  }

  reportEnd(endOffset: number): void {
    this.#endOffset = endOffset;
  }

  async take(batch: SourceBatch, control: BatchControl): Promise<Verdict> {
    // A checkpoint from the timer may wait for the store: ownership must outlive that.
    while (this.#queue.busy) {
      await Promise.race([this.#queue.idle(), sleep(HEARTBEAT_STEP_MS)]);
      await control.heartbeat();
    }
    return this.#queue.run(() => this.#take(batch, control));
  }

  /** Writes what was counted so far; `read-on` when it is in the store. */
  checkpoint(control?: BatchControl): Promise<Verdict> {
    return this.#queue.run(() => this.#checkpoint(control));
  }

  /** A checkpoint from the timer: not while a batch is worked on, which looks at the clock itself. */
  async checkpointIfDue(): Promise<Verdict> {
    return this.#queue.busy || !this.#due() ? READ_ON : this.checkpoint();
  }

  async #take(batch: SourceBatch, control: BatchControl): Promise<Verdict> {
    if (this.#frozen !== null) {
      const verdict = await this.#checkpoint(control);
      if (verdict.action !== "read-on") return verdict;
    }
    if (this.#released || this.#context.isStopping()) return DROP;
    this.#endOffset = batch.endOffset;
    const guarded = await this.#guard(batch, control);
    if (guarded !== null) return guarded;

    const { records } = batch;
    for (let at = firstAtOrAfter(records, this.#position); at < records.length; at += CHUNK_RECORDS) {
      const end = Math.min(records.length, at + CHUNK_RECORDS);
      this.#count(records, at, end);
      // Where the next record begins: a hole before it holds nothing to be had.
      this.#position = end < records.length ? records.offsetAt(end) : batch.toOffset;
      if (this.#due()) {
        const verdict = await this.#checkpoint(control);
        if (verdict.action !== "read-on") return verdict;
      }
      await control.heartbeat();
      if (this.#released || this.#context.isStopping()) return DROP;
    }
    this.#position = batch.toOffset;
    return READ_ON;
  }

  /** Holds a batch against the position: what is not its continuation is never counted. */
  async #guard(batch: SourceBatch, control: BatchControl): Promise<Verdict | null> {
    if (batch.endOffset < this.#position) {
      const reason = `the log ends at ${batch.endOffset}, before offset ${this.#position} that was read already`;
      return this.#context.haltRewound(this.key, this.#claim.epoch, reason);
    }
    if (batch.fromOffset > this.#position) {
      const lowOffset = await control.lowOffset();
      if (this.#released) return DROP;
      if (lowOffset <= this.#position) return { action: "seek", offset: this.#position };
      this.#noteGap(Math.min(lowOffset, batch.fromOffset));
    }
    return batch.toOffset <= this.#position ? { action: "seek", offset: this.#position } : null;
  }

  /** Offsets that retention took before they were read: part of the next checkpoint, told in the logbook by the store. */
  #noteGap(toOffset: number): void {
    const gap = { fromOffset: this.#position, toOffset, reason: "removed by retention before it was read" };
    this.#delta.gaps.push({ topic: this.key.topic, partition: this.key.partition, ...gap });
    this.#position = toOffset;
    this.#context.noteGap(this.key, gap.fromOffset, gap.toOffset);
  }

  #count(records: SourceRecords, from: number, to: number): void {
    const lateAfterMs = this.#context.stream.paneMs + this.#context.stream.latenessMs;
    const { paneMs, payload } = this.#context.stream;
    const recordTime = payload.eventTime === null;
    this.#context.lookAtClock();
    for (let i = from; i < to; i++) {
      const timestampMs = recordTime ? records.timestampMsAt(i) : null;
      const result = this.#decoder.decode(records.valueAt(i), timestampMs);
      if (!result.ok) {
        this.#refuse(records.offsetAt(i), records.valueAt(i), result.reason, result.detail);
        continue;
      }
      const { eventMs } = result.event;
      this.#accumulator.add(result.event);
      this.#delta.events++;
      if (this.#maxEventMs === null || eventMs > this.#maxEventMs) this.#maxEventMs = eventMs;
      else if (Math.floor(eventMs / paneMs) * paneMs + lateAfterMs <= this.#maxEventMs)
        this.#delta.lateEvents++;
      if (this.#delta.maxEventMs === null || eventMs > this.#delta.maxEventMs)
        this.#delta.maxEventMs = eventMs;
    }
  }

  #refuse(offset: number, value: Uint8Array | null, reason: DeadLetter["reason"], detail: string): void {
    const { stream, topic, partition } = this.key;
    // A copy: a view would keep the whole fetched buffer alive until the checkpoint.
    const payload = value === null ? null : Uint8Array.prototype.slice.call(value, 0, MOST_KEPT_BYTES);
    const payloadBytes = value?.length ?? 0;
    this.#delta.letters.push({ stream, topic, partition, offset, reason, detail, payload, payloadBytes });
    this.#delta.deadLetterBytes += 512 + (payload?.length ?? 0);
    this.#delta.deadLetters[reason] = (this.#delta.deadLetters[reason] ?? 0) + 1;
  }

  #due(): boolean {
    if (this.#frozen === null && this.#position === this.#committed) return false;
    const { limits } = this.#context;
    return (
      this.#delta.events >= limits.checkpointEvents ||
      this.#delta.deadLetterBytes >= MOST_DEAD_LETTER_BYTES ||
      performance.now() - this.#lastCheckpointMs >= limits.checkpointMs ||
      this.#context.overBudget(this.heldBytes)
    );
  }

  async #checkpoint(control?: BatchControl): Promise<Verdict> {
    if (this.#released) return DROP;
    if (this.#frozen === null && this.#position === this.#committed) return READ_ON;

    const startedAtMs = performance.now();
    this.#frozen ??= this.#freeze();
    const { letters, checkpoint } = this.#frozen;
    const plan = this.#context.retryPlan(this.key, () => this.#released, control);
    await retryUpstream(() => this.#context.sendDeadLetters(letters), plan);
    const outcome = await retryUpstream(() => this.#commit(checkpoint), plan);
    if (this.#released) return DROP;
    if (outcome === "fenced") {
      this.release();
      return FENCED;
    }
    this.#committed = checkpoint.toOffset;
    this.#frozen = null;
    this.#lastCheckpointMs = performance.now();
    this.#context.checkpointed(checkpoint, performance.now() - startedAtMs);
    return READ_ON;
  }

  async #commit(checkpoint: Checkpoint): Promise<"committed" | "fenced"> {
    const outcome = await this.#context.commitCheckpoint(checkpoint);
    if (outcome.outcome === "committed") return "committed";
    // An attempt whose answer was lost did come through: only this claim can have moved the offset under its epoch.
    const cameThrough = outcome.epoch === checkpoint.epoch && outcome.nextOffset === checkpoint.toOffset;
    return cameThrough ? "committed" : "fenced";
  }

  #freeze(): FrozenCheckpoint {
    const { letters, deadLetterBytes, ...counts } = this.#delta;
    const segments = this.#accumulator.take();
    const checkpoint: Checkpoint = {
      ...this.key,
      ...counts,
      owner: this.#context.owner,
      epoch: this.#claim.epoch,
      fromOffset: this.#committed,
      toOffset: this.#position,
      segments,
      atMs: this.#context.nowMs(),
    };
    this.#delta = emptyDelta();
    const heldBytes = segments.reduce((bytes, segment) => bytes + segment.body.length, deadLetterBytes);
    return { checkpoint, letters, heldBytes };
  }
}

interface FrozenCheckpoint {
  readonly checkpoint: Checkpoint;
  readonly letters: readonly DeadLetter[];
  readonly heldBytes: number;
}

/** What a checkpoint says beside its segments. */
interface Delta {
  events: number;
  lateEvents: number;
  maxEventMs: number | null;
  readonly deadLetters: Record<string, number>;
  readonly letters: DeadLetter[];
  deadLetterBytes: number;
  readonly gaps: OffsetGap[];
}

function emptyDelta(): Delta {
  return {
    events: 0,
    lateEvents: 0,
    maxEventMs: null,
    deadLetters: {},
    letters: [],
    deadLetterBytes: 0,
    gaps: [],
  };
}

/** Index of the first record at or after an offset. */
function firstAtOrAfter(records: SourceRecords, offset: number): number {
  let low = 0;
  let high = records.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (records.offsetAt(middle) < offset) low = middle + 1;
    else high = middle;
  }
  return low;
}
