import type { EvaluationRow, FeatureStateRow } from "@moorline/store";
import type { Metrics } from "@moorline/telemetry";

const STATES = ["holding", "straining", "adrift", "thin", "silent"] as const;

/** Takes every series of a feature away: another process speaks for it now. */
export function hideFeature(metrics: Metrics, row: FeatureStateRow): void {
  const labels = labelsOf(row);
  for (const state of STATES) metrics.featureState.remove({ ...labels, state });
  metrics.featureStateSince.remove(labels);
  hideFigures(metrics, row);
}

/** Takes the figures of the last comparison away, not the state. */
export function hideFigures(metrics: Metrics, row: FeatureStateRow): void {
  const labels = labelsOf(row);
  for (const tail of ["lower", "upper"] as const) metrics.tailExceedanceRatio.remove({ ...labels, tail });
  const others = [
    metrics.windowValues,
    metrics.ksDistance,
    metrics.wassersteinScaled,
    metrics.missingFraction,
  ];
  for (const gauge of others) gauge.remove(labels);
}

/** What of a stored comparison is a metric. */
interface ComparedFigures {
  readonly n?: { readonly production: number };
  readonly missing?: { readonly production: number | null };
  readonly ks?: { readonly distance: number } | null;
  readonly wasserstein?: { readonly scaled: number | null } | null;
  readonly tails?: {
    readonly lower: { readonly ratio: number | null } | null;
    readonly upper: { readonly ratio: number | null } | null;
  } | null;
}

/** Puts a state on Prometheus: one series a state, 1 for the one that holds. */
export function showState(metrics: Metrics, row: FeatureStateRow): void {
  const labels = labelsOf(row);
  for (const state of STATES) metrics.featureState.set({ ...labels, state }, state === row.state ? 1 : 0);
  metrics.featureStateSince.set(labels, row.sinceMs / 1_000);
}

/** Puts the figures of the last window on Prometheus. A figure that there is no answer for has no series: never NaN, never a stale one. */
export function showFigures(metrics: Metrics, row: EvaluationRow): void {
  const labels = labelsOf(row);
  const figures = row.comparison as ComparedFigures;
  metrics.windowValues.set(labels, figures.n?.production ?? 0);
  setOrRemove(metrics.ksDistance, labels, figures.ks?.distance);
  setOrRemove(metrics.wassersteinScaled, labels, figures.wasserstein?.scaled);
  setOrRemove(metrics.missingFraction, labels, figures.missing?.production);
  for (const tail of ["lower", "upper"] as const) {
    setOrRemove(metrics.tailExceedanceRatio, { ...labels, tail }, figures.tails?.[tail]?.ratio);
  }
}

type SeriesLabels = Pick<FeatureStateRow, "stream" | "feature" | "slice" | "horizon">;

function labelsOf({ stream, feature, slice, horizon }: SeriesLabels) {
  return { stream, feature, slice, horizon };
}

type Labels<L extends string> = Partial<Record<L, string | number>>;

interface SettableGauge<L extends string> {
  set(labels: Labels<L>, value: number): void;
  remove(labels: Labels<L>): void;
}

function setOrRemove<L extends string>(
  gauge: SettableGauge<L>,
  labels: Labels<L>,
  value: number | null | undefined,
): void {
  if (value === null || value === undefined || !Number.isFinite(value)) gauge.remove(labels);
  else gauge.set(labels, value);
}
