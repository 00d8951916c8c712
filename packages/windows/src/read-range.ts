import { NumericSketch } from "@moorline/sketch";
import type { RollupQuery, RollupRow, Store } from "@moorline/store";
import { coverRange } from "./cover-range.js";
import { wholePanes } from "./window-bounds.js";

export interface RangeQuery {
  readonly stream: string;
  readonly feature: string;
  readonly slice: string;
  readonly fromMs: number;
  readonly toMs: number;
  readonly paneMs: number;
  /** From the stream's progress; 0 reads panes only. */
  readonly closedThroughMs: number;
}

export interface RangeSketch {
  /** Everything counted in the range; null when there is no event. */
  readonly sketch: NumericSketch | null;
  /** True when a pane in the range was amended by late events. */
  readonly amended: boolean;
  /** The range that was read: widened to whole panes. */
  readonly fromMs: number;
  readonly toMs: number;
  /** Rollups merged. */
  readonly rollups: number;
}

/** Where rollups are read from: the store, or rows not yet written in front of it. */
export type RollupReader = (query: RollupQuery) => Promise<readonly RollupRow[]>;

/** A feature and slice over any range, merged k ways at once from days, hours and panes, in the order of time. */
export async function readRange(source: Store | RollupReader, query: RangeQuery): Promise<RangeSketch> {
  const read = typeof source === "function" ? source : source.panes.rollups;
  const { stream, feature, slice, paneMs, closedThroughMs } = query;
  const range = wholePanes(query.fromMs, query.toMs, paneMs);
  const rows: RollupRow[] = [];
  for (const run of coverRange({ ...range, paneMs, closedThroughMs })) {
    rows.push(
      ...(await read({ stream, feature, slice, level: run.level, fromMs: run.fromMs, toMs: run.toMs })),
    );
  }
  return {
    sketch: mergeRollups(rows),
    amended: rows.some((row) => row.amended),
    ...range,
    rollups: rows.length,
  };
}

/** The k-way merge of rollups in the order given; null for none. */
export function mergeRollups(rows: readonly RollupRow[]): NumericSketch | null {
  const sketches = rows.map((row) => NumericSketch.decode(row.body));
  if (sketches.length < 2) return sketches[0] ?? null;
  return NumericSketch.merge(sketches);
}
