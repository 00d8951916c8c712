import type { StreamConfig } from "@moorline/config";
import type { FeatureState, Store } from "@moorline/store";
import { isoTime } from "./feature-rows.js";

/** One stream: its feed's health and how many of its features are in which state. */
export interface StreamSummary {
  readonly name: string;
  readonly features: number;
  readonly slices: readonly string[];
  readonly horizons: readonly string[];
  readonly activeBaseline: { readonly id: string; readonly since: string } | null;
  /** Features by their worst state over horizons, slice `all`. */
  readonly states: Readonly<Record<FeatureState, number>>;
  readonly feed: {
    readonly events: number;
    readonly lateEvents: number;
    readonly deadLetters: number;
    readonly partitions: number;
    /** Partitions that are not being read as usual, with their status. */
    readonly halted: readonly {
      readonly topic: string;
      readonly partition: number;
      readonly status: string;
    }[];
    readonly lastEventAt: string | null;
    readonly watermark: string | null;
    readonly evaluatedAt: string | null;
  };
}

const STATES: readonly FeatureState[] = ["adrift", "straining", "silent", "thin", "holding"];

export async function streamSummary(store: Store, stream: StreamConfig): Promise<StreamSummary> {
  const [partitions, progress, states, active, slices] = await Promise.all([
    store.ingest.partitions(stream.name),
    store.evaluations.progress(stream.name),
    store.evaluations.states(stream.name),
    store.baselines.active(stream.name),
    store.panes.slices(stream.name),
  ]);
  const worst = new Map<string, FeatureState>();
  for (const row of states) {
    if (row.slice !== "all") continue;
    const known = worst.get(row.feature);
    if (known === undefined || STATES.indexOf(row.state) < STATES.indexOf(known))
      worst.set(row.feature, row.state);
  }
  const count = (state: FeatureState) => [...worst.values()].filter((one) => one === state).length;
  const lastEventAtMs = Math.max(0, ...partitions.map((row) => row.lastEventAtMs ?? 0));
  const sum = (key: "events" | "lateEvents" | "deadLetters") =>
    partitions.reduce((total, row) => total + row[key], 0);
  return {
    name: stream.name,
    features: stream.features.length,
    slices,
    horizons: stream.horizons.map((horizon) => horizon.label),
    activeBaseline: active === null ? null : { id: active.baselineId, since: isoTime(active.sinceMs) },
    states: {
      adrift: count("adrift"),
      straining: count("straining"),
      silent: count("silent"),
      thin: count("thin"),
      holding: count("holding"),
    },
    feed: {
      events: sum("events"),
      lateEvents: sum("lateEvents"),
      deadLetters: sum("deadLetters"),
      partitions: partitions.length,
      halted: partitions
        .filter((row) => row.status !== "reading" && row.status !== "finished")
        .map(({ topic, partition, status }) => ({ topic, partition, status })),
      lastEventAt: lastEventAtMs === 0 ? null : isoTime(lastEventAtMs),
      watermark: progress === null || progress.watermarkMs === 0 ? null : isoTime(progress.watermarkMs),
      evaluatedAt: progress === null ? null : isoTime(progress.evaluatedAtMs),
    },
  };
}
