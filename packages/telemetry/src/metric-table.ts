/** One exported metric: what it is called, what it means and by what it is split. */
export interface MetricRow {
  readonly type: "counter" | "gauge" | "histogram";
  readonly name: string;
  readonly help: string;
  readonly labels: readonly string[];
  /** Histograms only; in the metric's unit. */
  readonly buckets?: readonly number[];
}

const FEATURE_LABELS = ["stream", "feature", "slice", "horizon"] as const;

/** Keeps literal keys and labels while checking the rows. */
function metricRows<const T extends Record<string, MetricRow>>(rows: T): T {
  return rows;
}

/** Every metric of Moorline. Label values come from the config or from bounded sets, never from event data without a cap. */
export const METRIC_TABLE = metricRows({
  ksDistance: {
    type: "gauge",
    name: "moorline_feature_ks_distance",
    help: "Two-sample Kolmogorov-Smirnov distance of the last window from the active baseline, 0 to 1.",
    labels: FEATURE_LABELS,
  },
  wassersteinScaled: {
    type: "gauge",
    name: "moorline_feature_wasserstein_scaled",
    help: "Wasserstein-1 distance of the last window from the active baseline, in units of the baseline's scale.",
    labels: FEATURE_LABELS,
  },
  tailExceedanceRatio: {
    type: "gauge",
    name: "moorline_feature_tail_exceedance_ratio",
    help: "Share of the last window beyond the baseline's frozen tail threshold, divided by the baseline's own share.",
    labels: [...FEATURE_LABELS, "tail"],
  },
  missingFraction: {
    type: "gauge",
    name: "moorline_feature_missing_fraction",
    help: "Share of the last window's events that lack the feature.",
    labels: FEATURE_LABELS,
  },
  featureState: {
    type: "gauge",
    name: "moorline_feature_state",
    help: "1 for the state the feature is in (holding, straining, adrift, thin, silent), else 0.",
    labels: [...FEATURE_LABELS, "state"],
  },
  featureStateSince: {
    type: "gauge",
    name: "moorline_feature_state_since_timestamp_seconds",
    help: "Event time since which the feature is in its state, in seconds since 1970.",
    labels: FEATURE_LABELS,
  },
  windowValues: {
    type: "gauge",
    name: "moorline_window_values",
    help: "Finite values of the feature in the last window.",
    labels: FEATURE_LABELS,
  },
  evaluationAge: {
    type: "gauge",
    name: "moorline_evaluation_age_seconds",
    help: "Wall-clock seconds since the last window of the horizon was evaluated.",
    labels: ["stream", "horizon"],
  },
  watermarkAge: {
    type: "gauge",
    name: "moorline_watermark_age_seconds",
    help: "Wall-clock time minus the stream's watermark.",
    labels: ["stream"],
  },
  eventsTotal: {
    type: "counter",
    name: "moorline_events_total",
    help: "Events by outcome: counted, late (counted too) or dead-lettered; raised when their checkpoint is written.",
    labels: ["stream", "outcome"],
  },
  lagMessages: {
    type: "gauge",
    name: "moorline_collector_lag_messages",
    help: "Messages between the next offset to read and the end of the partition (bytes for a file source).",
    labels: ["stream", "topic", "partition"],
  },
  deadLettersTotal: {
    type: "counter",
    name: "moorline_dead_letters_total",
    help: "Events that could not be counted, by reason; raised when their checkpoint is written.",
    labels: ["stream", "reason"],
  },
  checkpointDuration: {
    type: "histogram",
    name: "moorline_checkpoint_duration_seconds",
    help: "Time to write one checkpoint of one partition.",
    labels: ["stream"],
    buckets: [0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 1, 2.5, 5, 10],
  },
  rejoinsTotal: {
    type: "counter",
    name: "moorline_collector_rejoins_total",
    help: "Times that partitions changed hands; what was not yet written is read again.",
    labels: ["stream"],
  },
  fencedTotal: {
    type: "counter",
    name: "moorline_collector_fenced_total",
    help: "Checkpoints that changed nothing because another collector owns the partition.",
    labels: ["stream"],
  },
  awayTotal: {
    type: "counter",
    name: "moorline_collector_away_total",
    help: "Tries that failed because an outside system (store, dead-letters, source) did not answer.",
    labels: ["stream", "system"],
  },
  gapMessagesTotal: {
    type: "counter",
    name: "moorline_collector_gap_messages_total",
    help: "Offsets that were gone before they could be read (retention); each gap is in the logbook.",
    labels: ["stream"],
  },
  sliceOverflowTotal: {
    type: "counter",
    name: "moorline_slice_overflow_total",
    help: "Times that a slice key reached its limit of values; the rest is counted under other.",
    labels: ["stream", "key"],
  },
  evaluationDuration: {
    type: "histogram",
    name: "moorline_evaluation_duration_seconds",
    help: "Time of one evaluation round that closed at least one pane.",
    labels: ["stream"],
    buckets: [0.01, 0.05, 0.1, 0.25, 0.5, 1, 2.5, 5, 10, 30],
  },
});

export type MetricKey = keyof typeof METRIC_TABLE;
