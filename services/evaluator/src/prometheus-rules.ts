import type { MoorlineConfig, StreamConfig } from "@moorline/config";
import { stringify } from "yaml";

const CAUTION =
  "Drift is not proof of harm, and no drift is not proof of safety: follow your review practice and local rules before acting on the model.";

/** Alert on a horizon that was not evaluated for this many of its lengths. */
const STALE_HORIZONS = 2;
const BEHIND_MESSAGES = 10_000;

interface AlertRule {
  readonly alert: string;
  readonly expr: string;
  readonly for?: string;
  readonly labels: Readonly<Record<string, string>>;
  readonly annotations: Readonly<Record<string, string>>;
}

/** Prometheus alert rules for a config, as YAML: what `moorline rules` prints. The same config gives the same text. */
export function prometheusRules(config: MoorlineConfig): string {
  const header =
    "# Alert rules for this Moorline config; made by `moorline rules`, so change the config and make them again.\n";
  const groups = config.streams.map((stream) => ({
    name: `moorline ${stream.name}`,
    rules: [
      featureAdrift(stream, config.gateway.publicUrl),
      feedSilent(stream),
      collectorBehind(stream),
      evaluationStale(stream),
      deadLetters(stream),
    ],
  }));
  return header + stringify({ groups }, { lineWidth: 0 });
}

function selector(stream: StreamConfig, more = ""): string {
  return `{stream=${quoted(stream.name)}${more}}`;
}

/** A PromQL string; also a YAML-safe one, for the whole expression is quoted by the YAML writer. */
function quoted(text: string): string {
  return JSON.stringify(text);
}

/** The value of a companion series of the alert's own feature, in an annotation. */
function figure(metric: string, format: string, more = ""): string {
  const match = `{stream=%q,feature=%q,slice=%q,horizon=%q${more}}`;
  const query = `printf \`${metric}${match}\` $labels.stream $labels.feature $labels.slice $labels.horizon`;
  return `{{ with query (${query}) }}{{ . | first | value | ${format} }}{{ else }}not known{{ end }}`;
}

/** A label as a path segment of a link: `urlquery` writes a space as a plus, which only means one after the question mark. */
function inPath(label: string): string {
  return `{{ $labels.${label} | urlquery | reReplaceAll "\\\\+" "%20" }}`;
}

function featureAdrift(stream: StreamConfig, publicUrl: string): AlertRule {
  const ratio = (tail: string) =>
    figure("moorline_feature_tail_exceedance_ratio", `printf "%.2f"`, `,tail=${quoted(tail)}`);
  const link = `${publicUrl.replace(/\/$/, "")}/streams/${encodeURIComponent(stream.name)}/features/${inPath("feature")}`;
  return {
    alert: "FeatureAdrift",
    expr: `moorline_feature_state${selector(stream, `,state="adrift"`)} == 1`,
    labels: { severity: "page" },
    annotations: {
      summary:
        "{{ $labels.feature }} of {{ $labels.stream }} is adrift ({{ $labels.slice }}, {{ $labels.horizon }})",
      description:
        `Since ${figure("moorline_feature_state_since_timestamp_seconds", "humanizeTimestamp")} (event time) the live values of {{ $labels.feature }} ` +
        `differ from the baseline by more than the tolerance. Share beyond the baseline's tail threshold, as a multiple of the baseline's own: ` +
        `upper tail ${ratio("upper")}, lower tail ${ratio("lower")}. KS distance ${figure("moorline_feature_ks_distance", `printf "%.3f"`)}, ` +
        `n = ${figure("moorline_window_values", `printf "%.0f"`)} values in the last window of {{ $labels.horizon }}, slice {{ $labels.slice }}. ${CAUTION}`,
      snapshot: `${link}?slice={{ $labels.slice | urlquery }}&horizon={{ $labels.horizon | urlquery }}`,
    },
  };
}

function feedSilent(stream: StreamConfig): AlertRule {
  return {
    alert: "FeedSilent",
    expr: `max by (stream) (moorline_feature_state${selector(stream, `,state="silent"`)}) == 1`,
    labels: { severity: "page" },
    annotations: {
      summary: "no events of {{ $labels.stream }}",
      description: `No event of {{ $labels.stream }} was counted for longer than its silentAfter. Nothing is known of its features until events come again: no data is not the absence of drift. ${CAUTION}`,
    },
  };
}

function collectorBehind(stream: StreamConfig): AlertRule {
  return {
    alert: "CollectorBehind",
    expr: `sum by (stream) (moorline_collector_lag_messages${selector(stream)}) > ${BEHIND_MESSAGES} and deriv(sum by (stream) (moorline_collector_lag_messages${selector(stream)})[10m:1m]) >= 0`,
    for: "10m",
    labels: { severity: "ticket" },
    annotations: {
      summary: "the collector of {{ $labels.stream }} is behind and does not catch up",
      description:
        "{{ $value | humanize }} messages of {{ $labels.stream }} wait to be read, and they do not become fewer. Add collectors, or look at the checkpoint duration.",
    },
  };
}

function evaluationStale(stream: StreamConfig): AlertRule {
  const tooOld = stream.horizons.map((horizon) => {
    const limitSeconds = Math.ceil((STALE_HORIZONS * horizon.ms + stream.latenessMs) / 1_000);
    const age = `moorline_evaluation_age_seconds${selector(stream, `,horizon=${quoted(horizon.label)}`)}`;
    return `${age} > ${limitSeconds}`;
  });
  return {
    alert: "EvaluationStale",
    expr: tooOld.join(" or "),
    for: "1m",
    labels: { severity: "page" },
    annotations: {
      summary:
        "{{ $labels.stream }} was not evaluated for {{ $value | humanizeDuration }} ({{ $labels.horizon }})",
      description: `No window of {{ $labels.horizon }} was evaluated for {{ $value | humanizeDuration }}: what is shown is old. Look at /readyz of the evaluator and at the watermark's age. ${CAUTION}`,
    },
  };
}

function deadLetters(stream: StreamConfig): AlertRule {
  const counted = `sum by (stream) (rate(moorline_events_total${selector(stream, `,outcome="counted"`)}[5m]))`;
  const dead = `sum by (stream) (rate(moorline_dead_letters_total${selector(stream)}[5m]))`;
  return {
    alert: "DeadLetters",
    expr: `${dead} / (${dead} + ${counted}) > 0.01`,
    for: "5m",
    labels: { severity: "ticket" },
    annotations: {
      summary: "{{ $value | humanizePercentage }} of {{ $labels.stream }} cannot be counted",
      description:
        "More than 1 % of the events of {{ $labels.stream }} went to the dead letters in the last 5 minutes. The reason is in moorline_dead_letters_total and in each dead letter's headers.",
    },
  };
}
