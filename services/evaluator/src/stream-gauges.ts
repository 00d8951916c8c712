import type { StreamConfig } from "@moorline/config";
import type { EvaluationRow, FeatureStateRow } from "@moorline/store";
import type { Metrics } from "@moorline/telemetry";
import { hideFeature, hideFigures, showFigures, showState } from "./feature-gauges.js";

/** What this process says of one stream on /metrics: nothing while another process leads the stream. */
export class StreamGauges {
  readonly #metrics: Metrics;
  readonly #stream: StreamConfig;
  readonly #shown = new Map<string, FeatureStateRow>();
  /** Wall clock of the last evaluated window by horizon; empty while nothing is shown. */
  readonly #evaluatedAtMs = new Map<string, number>();
  #watermarkMs: number | null = null;

  constructor(metrics: Metrics, stream: StreamConfig) {
    this.#metrics = metrics;
    this.#stream = stream;
  }

  /** Begins to speak for the stream. A horizon that the store has no evaluation of ages from `sinceMs` on. */
  begin(sinceMs: number, lastEvaluatedAtMs: ReadonlyMap<string, number>): void {
    for (const { label } of this.#stream.horizons)
      this.#evaluatedAtMs.set(label, lastEvaluatedAtMs.get(label) ?? sinceMs);
  }

  states(rows: readonly FeatureStateRow[]): void {
    for (const row of rows) {
      this.#shown.set(JSON.stringify([row.horizon, row.slice, row.feature]), row);
      showState(this.#metrics, row);
    }
  }

  figures(rows: readonly EvaluationRow[]): void {
    for (const row of rows) showFigures(this.#metrics, row);
  }

  /** The windows of one closed pane. A series that was not compared loses the figures of its last comparison. */
  closed(states: readonly FeatureStateRow[], evaluations: readonly EvaluationRow[], nowMs: number): void {
    this.states(states);
    for (const row of states) {
      this.#evaluatedAtMs.set(row.horizon, nowMs);
      hideFigures(this.#metrics, row);
    }
    this.figures(evaluations);
  }

  watermark(watermarkMs: number): void {
    this.#watermarkMs = watermarkMs;
  }

  /** Ages go on while the store is away: that nothing is evaluated must show. */
  ages(nowMs: number): void {
    const stream = this.#stream.name;
    for (const [horizon, atMs] of this.#evaluatedAtMs)
      this.#metrics.evaluationAge.set({ stream, horizon }, (nowMs - atMs) / 1_000);
    if (this.#watermarkMs !== null)
      this.#metrics.watermarkAge.set({ stream }, (nowMs - this.#watermarkMs) / 1_000);
  }

  /** A process that does not lead says nothing of the stream: what it knows is old. */
  hide(): void {
    const stream = this.#stream.name;
    for (const row of this.#shown.values()) hideFeature(this.#metrics, row);
    for (const horizon of this.#evaluatedAtMs.keys()) this.#metrics.evaluationAge.remove({ stream, horizon });
    this.#metrics.watermarkAge.remove({ stream });
    this.#shown.clear();
    this.#evaluatedAtMs.clear();
    this.#watermarkMs = null;
  }
}
