import type { StreamConfig } from "@moorline/config";
import type { EvaluationRow, FeatureState, FeatureStateRow, Store } from "@moorline/store";

/** One feature, slice and horizon as it stands now. */
export interface FeatureRow {
  readonly feature: string;
  readonly kind: "numeric";
  readonly unit: string | null;
  readonly slice: string;
  readonly horizon: string;
  readonly state: FeatureState;
  /** Event time since when it is in this state. */
  readonly since: string;
  /** The last evaluated window; null before the first. */
  readonly window: { readonly from: string; readonly to: string } | null;
  readonly reading: string;
  readonly baselineId: string | null;
  readonly amended: boolean;
  readonly n: number | null;
  readonly missing: number | null;
  readonly ks: number | null;
  readonly wassersteinScaled: number | null;
  readonly tailRatio: { readonly lower: number | null; readonly upper: number | null };
}

export interface FeatureFilter {
  readonly state?: FeatureState;
  readonly slice?: string;
  readonly horizon?: string;
}

const WORST_FIRST: readonly FeatureState[] = ["adrift", "straining", "silent", "thin", "holding"];

/** Every feature of a stream by slice and horizon, worst first; the whole before its slices, short horizons before long ones. */
export async function featureRows(
  store: Store,
  stream: StreamConfig,
  filter: FeatureFilter,
): Promise<readonly FeatureRow[]> {
  const states = (await store.evaluations.states(stream.name)).filter(
    (row) =>
      (filter.state === undefined || row.state === filter.state) &&
      (filter.slice === undefined || row.slice === filter.slice) &&
      (filter.horizon === undefined || row.horizon === filter.horizon),
  );
  const evaluations = await lastEvaluations(store, stream.name, states);
  const order = new Map(stream.horizons.map((horizon, index) => [horizon.label, index]));
  return states
    .map((row) => featureRow(stream, row, evaluations.get(keyOf(row))))
    .toSorted(
      (a, b) =>
        WORST_FIRST.indexOf(a.state) - WORST_FIRST.indexOf(b.state) ||
        Number(b.slice === "all") - Number(a.slice === "all") ||
        compareText(a.feature, b.feature) ||
        compareText(a.slice, b.slice) ||
        (order.get(a.horizon) ?? 0) - (order.get(b.horizon) ?? 0),
    );
}

/** The evaluation that each state was decided with: one query for every horizon and window end. */
async function lastEvaluations(
  store: Store,
  stream: string,
  states: readonly FeatureStateRow[],
): Promise<ReadonlyMap<string, EvaluationRow>> {
  const windows = new Map(states.map((row) => [`${row.windowEndMs} ${row.horizon}`, row]));
  const found = new Map<string, EvaluationRow>();
  for (const { horizon, windowEndMs } of windows.values()) {
    const rows = await store.evaluations.evaluations({
      stream,
      horizon,
      fromMs: windowEndMs - 1,
      toMs: windowEndMs,
    });
    for (const row of rows) found.set(keyOf(row), row);
  }
  return found;
}

interface StoredFigures {
  readonly n?: { readonly production: number };
  readonly missing?: { readonly production: number | null };
  readonly ks?: { readonly distance: number } | null;
  readonly wasserstein?: { readonly scaled: number | null } | null;
  readonly tails?: Readonly<Record<"lower" | "upper", { readonly ratio: number | null } | null>> | null;
}

function featureRow(
  stream: StreamConfig,
  row: FeatureStateRow,
  evaluation: EvaluationRow | undefined,
): FeatureRow {
  const unit = stream.features.find((feature) => feature.name === row.feature)?.unit ?? null;
  return {
    feature: row.feature,
    kind: "numeric",
    unit,
    slice: row.slice,
    horizon: row.horizon,
    state: row.state,
    since: isoTime(row.sinceMs),
    window:
      evaluation === undefined
        ? null
        : { from: isoTime(evaluation.windowStartMs), to: isoTime(evaluation.windowEndMs) },
    reading: row.sentence,
    baselineId: row.baselineId,
    amended: evaluation?.amended ?? false,
    ...storedFigures(evaluation),
  };
}

/** The headline figures of a stored comparison; null where there is no answer. */
export function storedFigures(evaluation: EvaluationRow | undefined) {
  const figures = (evaluation?.comparison ?? {}) as StoredFigures;
  return {
    n: figures.n?.production ?? null,
    missing: figures.missing?.production ?? null,
    ks: figures.ks?.distance ?? null,
    wassersteinScaled: figures.wasserstein?.scaled ?? null,
    tailRatio: { lower: figures.tails?.lower?.ratio ?? null, upper: figures.tails?.upper?.ratio ?? null },
  };
}

export function isoTime(ms: number): string {
  return new Date(ms).toISOString();
}

function keyOf({ horizon, slice, feature }: Pick<FeatureStateRow, "horizon" | "slice" | "feature">): string {
  return JSON.stringify([horizon, slice, feature]);
}

function compareText(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}
