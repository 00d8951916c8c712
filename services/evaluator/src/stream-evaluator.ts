import { setImmediate as nextTurn } from "node:timers/promises";
import { streamRule } from "@moorline/baseline";
import type { StreamConfig } from "@moorline/config";
import type {
  EvaluationCommit,
  FeatureStateRow,
  LogbookWrite,
  PartitionRow,
  Store,
  StreamProgress,
} from "@moorline/store";
import type { Telemetry } from "@moorline/telemetry";
import { BaselineSides } from "./baseline-sides.js";
import { ClaimsSeen } from "./claims-seen.js";
import { amendPane, closePane, type Round, type RoundInput } from "./evaluation-round.js";
import { LeaseKeeper, LeaseLost } from "./lease-keeper.js";
import { panePlan } from "./pane-plan.js";
import { silenceChange } from "./silence.js";
import { StateBook } from "./state-book.js";
import { StreamGauges } from "./stream-gauges.js";
import { watermark } from "./watermark.js";

/** Panes closed before the tick looks again at what is pending. */
const MOST_PANES_A_TICK = 60;
/** Sketches merged or judged before other work of the process gets its turn. */
const WORKED_AT_A_STRETCH = 50;

const QUIET: ReadonlySet<string | undefined> = new Set(["holding", "thin"]);

export interface StreamEvaluatorParts {
  readonly stream: StreamConfig;
  readonly store: Store;
  readonly telemetry: Telemetry;
  readonly owner: string;
  /** How long a partition that changed hands holds the watermark back before its first event: a few checkpoints. */
  readonly settleMs: number;
  readonly nowMs: () => number;
}

/** One stream's evaluation, by whoever holds its lease. */
export class StreamEvaluator {
  readonly #parts: StreamEvaluatorParts;
  readonly #baselines: BaselineSides;
  readonly #lease: LeaseKeeper;
  readonly #gauges: StreamGauges;
  readonly #claims = new ClaimsSeen();
  readonly #startedMs: number;
  #states = new StateBook([]);
  #slices = new Set<string>();
  #progress: StreamProgress | null = null;
  #worked = 0;
  #stopping = false;

  constructor(parts: StreamEvaluatorParts) {
    const { stream, store, telemetry, owner, nowMs } = parts;
    this.#parts = parts;
    this.#baselines = new BaselineSides(store, stream.name);
    this.#lease = new LeaseKeeper(store, `evaluate ${stream.name}`, owner, nowMs);
    this.#gauges = new StreamGauges(telemetry.metrics, stream);
    this.#startedMs = nowMs();
  }

  /** Ends the round at hand after the pane that it is at. */
  stopSoon(): void {
    this.#stopping = true;
  }

  release(): Promise<void> {
    return this.#lease.release();
  }

  /** Closes what can be closed. True when there is more to do at once. */
  async tick(): Promise<boolean> {
    try {
      return await this.#tick();
    } catch (error) {
      // Whether the last write came through may not be known: what is in memory is read again before the next one.
      this.#lease.forget();
      if (error instanceof LeaseLost) return false;
      throw error;
    } finally {
      this.#gauges.ages(this.#parts.nowMs());
    }
  }

  async #tick(): Promise<boolean> {
    const { store, stream } = this.#parts;
    if (!(await this.#lead())) return false;
    const partitions = await store.ingest.partitions(stream.name);
    await this.#baselines.refresh(() => this.#rest());
    if (!(await this.#noticeSilence(partitions))) return false;
    const { watermarkMs, nothingActive } = this.#watermark(partitions);
    if (watermarkMs === null) return false;
    const plan = panePlan({
      pending: await store.panes.pendingPanes(stream.name),
      closedThroughMs: this.#progress?.closedThroughMs ?? null,
      watermarkMs,
      paneMs: stream.paneMs,
      longestHorizonMs: stream.horizons.at(-1)!.ms,
      nothingActive,
      mostPanes: MOST_PANES_A_TICK,
    });
    return (await this.#work(plan.closing, plan.late, watermarkMs)) && plan.more;
  }

  /** The stream's watermark; it never goes back, not across a restart either. */
  #watermark(partitions: readonly PartitionRow[]) {
    const { stream, settleMs, nowMs } = this.#parts;
    const mark = watermark({
      partitions,
      settling: this.#claims.settling(partitions, nowMs(), Math.min(settleMs, stream.idleAfterMs)),
      latenessMs: stream.latenessMs,
      idleAfterMs: stream.idleAfterMs,
      nowMs: nowMs(),
    });
    const reachedMs = this.#progress?.watermarkMs ?? null;
    if (mark.watermarkMs === null) return { ...mark, watermarkMs: reachedMs };
    const watermarkMs = Math.max(mark.watermarkMs, reachedMs ?? mark.watermarkMs);
    this.#gauges.watermark(watermarkMs);
    return { ...mark, watermarkMs };
  }

  /** True while this process leads the stream; what another leader may have written is read when it becomes the leader. */
  async #lead(): Promise<boolean> {
    const { store, stream, telemetry } = this.#parts;
    const taken = await this.#lease.acquire();
    if (taken === "another-leads") this.#gauges.hide();
    if (taken !== "taken") return taken === "kept";
    const states = await store.evaluations.states(stream.name);
    this.#states = new StateBook(states.filter((row) => this.#isConfigured(row)));
    this.#slices = new Set(["all", ...(await store.panes.slices(stream.name))]);
    this.#progress = await store.evaluations.progress(stream.name);
    await this.#showStored();
    telemetry.logger.info({ stream: stream.name, token: this.#lease.lease!.token }, "evaluating this stream");
    return true;
  }

  /** A feature or horizon that left the config keeps its last state in the store, but nothing will ever end an alert of it. */
  #isConfigured({ feature, horizon }: FeatureStateRow): boolean {
    const { features, horizons } = this.#parts.stream;
    return features.some(({ name }) => name === feature) && horizons.some(({ label }) => label === horizon);
  }

  /** Late panes first: what closes now reads their rollups. False when another leader took over or this process ends. */
  async #work(closing: readonly number[], late: readonly number[], watermarkMs: number): Promise<boolean> {
    const { telemetry, stream, nowMs } = this.#parts;
    if (closing.length + late.length === 0) return true;
    const end = telemetry.metrics.evaluationDuration.startTimer({ stream: stream.name });
    for (const paneStartMs of late) {
      const closedThroughMs = this.#progress!.closedThroughMs;
      const round = await amendPane(this.#roundInput(), paneStartMs, closedThroughMs);
      if (!(await this.#write(round, { watermarkMs, closedThroughMs, evaluatedAtMs: nowMs() }))) return false;
    }
    for (const paneStartMs of closing) {
      const round = await closePane(this.#roundInput(), paneStartMs);
      const closedThroughMs = paneStartMs + stream.paneMs;
      if (!(await this.#write(round, { watermarkMs, closedThroughMs, evaluatedAtMs: nowMs() }))) return false;
    }
    end();
    return true;
  }

  #roundInput(): RoundInput {
    const { store, stream, nowMs } = this.#parts;
    return {
      store,
      stream,
      rule: streamRule(stream, this.#slices.size),
      baselines: this.#baselines,
      states: this.#states,
      slices: this.#slices,
      nowMs: nowMs(),
      rest: () => this.#rest(),
    };
  }

  async #rest(): Promise<void> {
    this.#worked += 1;
    if (this.#worked % WORKED_AT_A_STRETCH !== 0) return;
    await nextTurn();
    await this.#lease.renewIfDue();
  }

  async #write(round: Round, progress: StreamProgress): Promise<boolean> {
    await this.#lease.renewIfDue();
    if (!(await this.#commit({ ...round, rollups: round.rollups.rows(), progress }))) return false;
    this.#progress = progress;
    this.#gauges.closed(round.states, round.evaluations, this.#parts.nowMs());
    return !this.#stopping;
  }

  /** False when the lease is another's by now: nothing was written. */
  async #commit(batch: Omit<EvaluationCommit, "stream" | "lease">): Promise<boolean> {
    const { store, stream } = this.#parts;
    const lease = this.#lease.lease!;
    const outcome = await store.evaluations.commit({ ...batch, stream: stream.name, lease });
    if (outcome === "fenced") {
      this.#lease.forget();
      return false;
    }
    for (const row of batch.states) this.#states.set(row);
    this.#logChanges(batch.logbook);
    return true;
  }

  #logChanges(entries: readonly LogbookWrite[]): void {
    const { logger } = this.#parts.telemetry;
    for (const entry of entries) {
      const { from, to } = (entry.detail ?? {}) as { from?: string; to?: string };
      if (to === "adrift" || to === "silent") logger.warn({ stream: entry.stream }, entry.sentence);
      // A slice with few events goes to and fro between the two all day.
      else if (QUIET.has(from) && QUIET.has(to)) logger.debug({ stream: entry.stream }, entry.sentence);
      else logger.info({ stream: entry.stream }, entry.sentence);
    }
  }

  /** States and last figures as the store has them: a restart must not blank an alert. */
  async #showStored(): Promise<void> {
    const { store, stream, nowMs } = this.#parts;
    const states = this.#states.all();
    this.#gauges.states(states);
    const evaluatedAtMs = new Map<string, number>();
    for (const { label: horizon } of stream.horizons) {
      const ends = states.flatMap((row) => (row.horizon === horizon ? [row.windowEndMs] : []));
      if (ends.length === 0) continue;
      const last = ends.reduce((a, b) => Math.max(a, b));
      const query = { stream: stream.name, horizon, fromMs: last - 1, toMs: last };
      const rows = await store.evaluations.evaluations(query);
      this.#gauges.figures(rows.filter((row) => this.#states.get(row) !== undefined));
      // Amended ones were made again later.
      if (rows.length > 0)
        evaluatedAtMs.set(
          horizon,
          rows.reduce((least, row) => Math.min(least, row.evaluatedAtMs), nowMs()),
        );
    }
    this.#gauges.begin(nowMs(), evaluatedAtMs);
    if (this.#progress !== null) this.#gauges.watermark(this.#progress.watermarkMs);
  }

  /** No events of the whole stream for too long: absence of data is never shown as absence of drift. False when another leader took over. */
  async #noticeSilence(partitions: readonly PartitionRow[]): Promise<boolean> {
    const { stream, nowMs } = this.#parts;
    const change = silenceChange({
      stream,
      partitions,
      startedMs: this.#startedMs,
      nowMs: nowMs(),
      states: this.#states.all(),
      slices: [...this.#slices],
    });
    if (change === null) return true;
    const nothing = { progress: this.#progress, rollups: [], settledSegments: [], evaluations: [] };
    if (!(await this.#commit({ ...nothing, ...change }))) return false;
    this.#gauges.states(change.states);
    return true;
  }
}
