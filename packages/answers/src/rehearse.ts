import { type HeldFeature, loadHeldFeature, sideOfSketch, streamRule } from "@moorline/baseline";
import type { DecisionConfig, FeatureConfig, StreamConfig } from "@moorline/config";
import { NumericSketch } from "@moorline/sketch";
import {
  countWindow,
  type DecisionMemory,
  type DecisionRule,
  decide,
  decisionSentence,
  type JudgedWindow,
} from "@moorline/stats";
import type { Store } from "@moorline/store";
import { type RollupReader, readRange } from "@moorline/windows";
import { activeBaselineId } from "./active-baseline.js";
import type { TimeRange } from "./read-pairs.js";
import { rollupRows } from "./rollup-rows.js";

export interface RehearsalRequest {
  readonly store: Store;
  readonly stream: StreamConfig;
  readonly features: readonly FeatureConfig[];
  /** Windows that lie wholly in it. */
  readonly range: TimeRange;
  /** The tolerances that are tried. */
  readonly decision: DecisionConfig;
  /** Id of a baseline, or the start of one; null: the active one. */
  readonly baseline: string | null;
  readonly onProgress?: (done: number, series: number) => void;
}

/** A time in which a feature would have been adrift: one page. */
export interface RehearsedPage {
  readonly feature: string;
  readonly slice: string;
  readonly horizon: string;
  /** End of the window that would have paged. */
  readonly from: string;
  /** End of the window with which it would have held again; null when it had not by the end of the range. */
  readonly to: string | null;
  readonly minutes: number;
  /** What the page would have said. */
  readonly reading: string;
}

export interface RehearsalAnswer {
  readonly stream: string;
  readonly range: { readonly from: string; readonly to: string };
  readonly baseline: { readonly id: string };
  readonly tolerances: { readonly tried: DecisionConfig; readonly configured: DecisionConfig };
  /** Windows decided, over features, slices and horizons. */
  readonly windows: number;
  /** Windows that had too few values. */
  readonly thin: number;
  /** With the tolerances that are tried, in the order of time. */
  readonly pages: readonly RehearsedPage[];
  /** With the tolerances of the config. */
  readonly configuredPages: readonly RehearsedPage[];
}

/**
 * Puts stored windows through other tolerances: what would have paged, when, and for how long. Reads rollups; writes and sends nothing.
 *
 * Edges  memory begins empty with the range; late events are in the windows from the start, other than when they were decided.
 */
export async function rehearse(request: RehearsalRequest): Promise<RehearsalAnswer> {
  const { store, stream, decision } = request;
  const progress = await store.evaluations.progress(stream.name);
  // What is not closed yet was not evaluated either.
  const closedThroughMs = progress?.closedThroughMs ?? 0;
  const range = { ...request.range, toMs: Math.min(request.range.toMs, closedThroughMs) };
  const baseline = await activeBaselineId(store, stream, request.baseline);
  const slices = await store.panes.slices(stream.name);
  const rules = [streamRule(stream, slices.length, decision), streamRule(stream, slices.length)] as const;
  const pages: readonly RehearsedPage[][] = [[], []];
  const counted = { windows: 0, thin: 0 };
  const series = slices.flatMap((slice) => request.features.map(({ name }) => ({ slice, feature: name })));
  for (const [done, { slice, feature }] of series.entries()) {
    request.onProgress?.(done, series.length);
    const { held } = await loadHeldFeature(store, baseline, slice, feature);
    const reader = await rollupRows(store, { stream: stream.name, slice, feature, ...range });
    for (const horizon of stream.horizons) {
      const at = { stream, slice, feature, horizon };
      const windows = await windowsOf(reader, held, at, range, closedThroughMs);
      counted.windows += windows.length;
      for (const [index, rule] of rules.entries()) {
        const run = decideAll(windows, held, rule, at);
        pages[index]!.push(...run.pages);
        if (index === 0) counted.thin += run.thin;
      }
    }
  }
  request.onProgress?.(series.length, series.length);
  const inTime = (list: RehearsedPage[]) => list.sort((a, b) => a.from.localeCompare(b.from));
  return {
    stream: stream.name,
    range: { from: iso(range.fromMs), to: iso(range.toMs) },
    baseline: { id: baseline },
    tolerances: { tried: decision, configured: stream.decision },
    ...counted,
    pages: inTime(pages[0]!),
    configuredPages: inTime(pages[1]!),
  };
}

interface Series {
  readonly stream: StreamConfig;
  readonly slice: string;
  readonly feature: string;
  readonly horizon: StreamConfig["horizons"][number];
}

async function windowsOf(
  reader: RollupReader,
  held: HeldFeature,
  { stream, slice, feature, horizon }: Series,
  { fromMs, toMs }: TimeRange,
  closedThroughMs: number,
): Promise<JudgedWindow[]> {
  const windows: JudgedWindow[] = [];
  const first = Math.ceil(fromMs / horizon.ms) * horizon.ms;
  for (let startMs = first; startMs + horizon.ms <= toMs; startMs += horizon.ms) {
    const endMs = startMs + horizon.ms;
    const { sketch } = await readRange(reader, {
      stream: stream.name,
      feature,
      slice,
      fromMs: startMs,
      toMs: endMs,
      paneMs: stream.paneMs,
      closedThroughMs,
    });
    windows.push({ counts: countWindow(held.side, sideOfSketch(sketch ?? new NumericSketch())), endMs });
  }
  return windows;
}

function decideAll(
  windows: readonly JudgedWindow[],
  held: HeldFeature,
  rule: DecisionRule,
  { slice, feature, horizon }: Series,
): { readonly pages: readonly RehearsedPage[]; readonly thin: number } {
  const ground = held.ground(horizon.ms, rule);
  const pages: RehearsedPage[] = [];
  let memory: DecisionMemory | null = null;
  let open: { readonly fromMs: number; readonly reading: string } | null = null;
  let thin = 0;
  const close = (endMs: number, isOver: boolean) => {
    const { fromMs, reading } = open!;
    const minutes = (endMs - fromMs) / 60_000;
    const to = isOver ? iso(endMs) : null;
    pages.push({ feature, slice, horizon: horizon.label, from: iso(fromMs), to, minutes, reading });
    open = null;
  };
  for (const window of windows) {
    const decision = decide(memory, window, ground);
    memory = decision.memory;
    if (decision.state === "thin") thin += 1;
    if (decision.state === "adrift" && open === null)
      open = { fromMs: window.endMs!, reading: decisionSentence(decision, window.counts, ground) };
    else if (decision.state !== "adrift" && open !== null) close(window.endMs!, true);
  }
  if (open !== null) close(windows.at(-1)!.endMs!, false);
  return { pages, thin };
}

function iso(ms: number): string {
  return new Date(ms).toISOString();
}
