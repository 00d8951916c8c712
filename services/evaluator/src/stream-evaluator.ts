import { setImmediate as nextTurn } from "node:timers/promises";
import type { StreamConfig } from "@moorline/config";
import { DEFAULT_DECISION_RULE, type DecisionRule } from "@moorline/stats";
import type {
  FeatureStateRow,
  Lease,
  LogbookWrite,
  PartitionRow,
  Store,
  StreamProgress,
} from "@moorline/store";
import type { Telemetry } from "@moorline/telemetry";
import { BaselineSides } from "./baseline-sides.js";
import { amendPane, closePane, type Round, type RoundInput } from "./evaluation-round.js";
import { hideFeature, showFigures, showState } from "./feature-gauges.js";
import { panePlan } from "./pane-plan.js";
import { silenceChange } from "./silence.js";
import { StateBook } from "./state-book.js";
import { watermark } from "./watermark.js";

/** Panes closed before the tick looks again at what is pending and renews its lease. */
const MOST_PANES_A_TICK = 60;
/** Long enough for the longest round; a leader that dies is followed after this. */
const LEASE_MS = 30_000;
/** Features judged before other work of the process gets its turn. */
const JUDGED_AT_A_STRETCH = 50;

const QUIET: ReadonlySet<string | undefined> = new Set(["holding", "thin"]);

export interface StreamEvaluatorParts {
  readonly stream: StreamConfig;
  readonly store: Store;
  readonly telemetry: Telemetry;
  readonly owner: string;
  readonly nowMs: () => number;
}

/** One stream's evaluation, by whoever holds its lease. */
export class StreamEvaluator {
  readonly #parts: StreamEvaluatorParts;
  readonly #rule: DecisionRule;
  readonly #baselines: BaselineSides;
  readonly #startedMs: number;
  /** Wall clock of the last evaluated window by horizon; the start, before the first. */
  readonly #evaluatedAtMs: Map<string, number>;
  #lease: Lease | null = null;
  #states = new StateBook([]);
  #slices = new Set<string>();
  #progress: StreamProgress | null = null;
  #judged = 0;
  #lastRenewedMs = 0;
  #stopping = false;

  constructor(parts: StreamEvaluatorParts) {
    const { stream, store, nowMs } = parts;
    this.#parts = parts;
    const { persistence, releaseAfter, bodyFloor, tailFactor } = stream.decision;
    this.#rule = { ...DEFAULT_DECISION_RULE, persistence, releaseAfter, bodyFloor, tailFactor };
    this.#baselines = new BaselineSides(store, stream.name);
    this.#startedMs = nowMs();
    this.#evaluatedAtMs = new Map(stream.horizons.map((horizon) => [horizon.label, this.#startedMs]));
  }

  /** Ends the round at hand after the pane that it is at. */
  stopSoon(): void {
    this.#stopping = true;
  }

  async release(): Promise<void> {
    if (this.#lease !== null) await this.#parts.store.evaluations.releaseLease(this.#lease);
    this.#lease = null;
  }

  /** Closes what can be closed. True when there is more to do at once. */
  async tick(): Promise<boolean> {
    try {
      return await this.#tick();
    } catch (error) {
      // Whether the last write came through may not be known: what is in memory is read again before the next one.
      this.#lease = null;
      throw error;
    }
  }

  async #tick(): Promise<boolean> {
    const { store, stream, nowMs } = this.#parts;
    if (!(await this.#lead())) return false;
    const partitions = await store.ingest.partitions(stream.name);
    await this.#baselines.refresh();
    const pending = await store.panes.pendingPanes(stream.name);
    const mark = watermark({
      partitions,
      latenessMs: stream.latenessMs,
      idleAfterMs: stream.idleAfterMs,
      nowMs: nowMs(),
    });
    let more = false;
    if (mark !== null) {
      const watermarkMs = Math.max(mark, this.#progress?.watermarkMs ?? mark);
      const plan = panePlan({
        pending,
        closedThroughMs: this.#progress?.closedThroughMs ?? null,
        watermarkMs,
        paneMs: stream.paneMs,
        longestHorizonMs: stream.horizons.at(-1)!.ms,
        nothingActive: !this.#anyActive(partitions),
        mostPanes: MOST_PANES_A_TICK,
      });
      more = (await this.#work(plan.closing, plan.late, watermarkMs)) && plan.more;
    }
    await this.#noticeSilence(partitions);
    this.#showAges();
    return more;
  }

  #anyActive(partitions: readonly PartitionRow[]): boolean {
    const { stream, nowMs } = this.#parts;
    return partitions.some(
      (row) =>
        row.status === "reading" &&
        row.lastEventAtMs !== null &&
        nowMs() - row.lastEventAtMs <= stream.idleAfterMs,
    );
  }

  /** True while this process leads the stream; what another leader may have written is read when it becomes the leader. */
  async #lead(): Promise<boolean> {
    const { store, stream, owner, nowMs, telemetry } = this.#parts;
    const lease = await store.evaluations.acquireLease(`evaluate ${stream.name}`, owner, nowMs(), LEASE_MS);
    this.#lastRenewedMs = nowMs();
    if (lease === null) {
      this.#lease = null;
      this.#hideAll();
      return false;
    }
    if (this.#lease?.token === lease.token) return true;
    this.#lease = lease;
    this.#states = new StateBook(await store.evaluations.states(stream.name));
    this.#slices = new Set(["all", ...(await store.panes.slices(stream.name))]);
    this.#progress = await store.evaluations.progress(stream.name);
    await this.#showStored();
    telemetry.logger.info({ stream: stream.name, token: lease.token }, "evaluating this stream");
    return true;
  }

  /** Late panes first: what closes now reads their rollups. False when another leader took over. */
  async #work(closing: readonly number[], late: readonly number[], watermarkMs: number): Promise<boolean> {
    const { telemetry, stream, nowMs } = this.#parts;
    const end =
      closing.length + late.length > 0
        ? telemetry.metrics.evaluationDuration.startTimer({ stream: stream.name })
        : null;
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
    end?.();
    return !this.#stopping;
  }

  #roundInput(): RoundInput {
    const { store, stream, nowMs } = this.#parts;
    return {
      store,
      stream,
      rule: this.#rule,
      baselines: this.#baselines,
      states: this.#states,
      slices: this.#slices,
      nowMs: nowMs(),
      rest: () => this.#rest(),
    };
  }

  async #rest(): Promise<void> {
    this.#judged += 1;
    if (this.#judged % JUDGED_AT_A_STRETCH === 0) await nextTurn();
  }

  async #write(round: Round, progress: StreamProgress): Promise<boolean> {
    const { store, stream, owner, nowMs } = this.#parts;
    if (nowMs() - this.#lastRenewedMs > LEASE_MS / 3) {
      await store.evaluations.acquireLease(this.#lease!.name, owner, nowMs(), LEASE_MS);
      this.#lastRenewedMs = nowMs();
    }
    const outcome = await store.evaluations.commit({
      stream: stream.name,
      lease: this.#lease!,
      progress,
      rollups: round.rollups.rows(),
      settledSegments: round.settledSegments,
      evaluations: round.evaluations,
      states: round.states,
      logbook: round.logbook,
    });
    if (outcome === "fenced") {
      this.#lease = null;
      return false;
    }
    this.#progress = progress;
    this.#show(round);
    return !this.#stopping;
  }

  #show(round: Round): void {
    const { telemetry, nowMs } = this.#parts;
    for (const row of round.states) {
      this.#states.set(row);
      showState(telemetry.metrics, row);
      this.#evaluatedAtMs.set(row.horizon, nowMs());
    }
    for (const row of round.evaluations) showFigures(telemetry.metrics, row);
    this.#logChanges(round.logbook);
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

  /** A process that does not lead says nothing of the stream's features: what it knows is old. */
  #hideAll(): void {
    const { telemetry, stream } = this.#parts;
    for (const row of this.#states.all()) hideFeature(telemetry.metrics, row);
    for (const { label: horizon } of stream.horizons)
      telemetry.metrics.evaluationAge.remove({ stream: stream.name, horizon });
    telemetry.metrics.watermarkAge.remove({ stream: stream.name });
    this.#states = new StateBook([]);
  }

  /** States and last figures as the store has them: a restart must not blank an alert. */
  async #showStored(): Promise<void> {
    const { store, stream, telemetry } = this.#parts;
    for (const row of this.#states.all()) showState(telemetry.metrics, row);
    for (const horizon of stream.horizons) {
      const ends = this.#states
        .all()
        .flatMap((row) => (row.horizon === horizon.label ? [row.windowEndMs] : []));
      if (ends.length === 0) continue;
      const last = ends.reduce((a, b) => Math.max(a, b));
      const rows = await store.evaluations.evaluations({
        stream: stream.name,
        horizon: horizon.label,
        fromMs: last - 1,
        toMs: last,
      });
      for (const row of rows) showFigures(telemetry.metrics, row);
    }
  }

  /** No events of the whole stream for too long: absence of data is never shown as absence of drift. */
  async #noticeSilence(partitions: readonly PartitionRow[]): Promise<void> {
    const { store, stream, nowMs } = this.#parts;
    const change = silenceChange({
      stream,
      partitions,
      startedMs: this.#startedMs,
      nowMs: nowMs(),
      states: this.#states.all(),
      slices: [...this.#slices],
    });
    if (change === null) return;
    const progress = this.#progress ?? { watermarkMs: 0, closedThroughMs: 0, evaluatedAtMs: nowMs() };
    const states: readonly FeatureStateRow[] = change.states;
    const outcome = await store.evaluations.commit({
      stream: stream.name,
      lease: this.#lease!,
      progress: { ...progress, evaluatedAtMs: nowMs() },
      rollups: [],
      settledSegments: [],
      evaluations: [],
      states,
      logbook: change.logbook,
    });
    if (outcome === "fenced") return;
    for (const row of states) {
      this.#states.set(row);
      showState(this.#parts.telemetry.metrics, row);
    }
    this.#logChanges(change.logbook);
  }

  #showAges(): void {
    const { telemetry, stream, nowMs } = this.#parts;
    const now = nowMs();
    for (const [horizon, atMs] of this.#evaluatedAtMs) {
      telemetry.metrics.evaluationAge.set({ stream: stream.name, horizon }, (now - atMs) / 1_000);
    }
    if (this.#progress !== null && this.#progress.watermarkMs > 0) {
      telemetry.metrics.watermarkAge.set({ stream: stream.name }, (now - this.#progress.watermarkMs) / 1_000);
    }
  }
}
