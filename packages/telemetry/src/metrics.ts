import { Counter, Gauge, Histogram, type Registry } from "prom-client";
import { METRIC_TABLE, type MetricKey, type MetricRow } from "./metric-table.js";

type LabelOf<K extends MetricKey> = (typeof METRIC_TABLE)[K]["labels"][number];

type MetricOf<K extends MetricKey> = (typeof METRIC_TABLE)[K]["type"] extends "counter"
  ? Counter<LabelOf<K>>
  : (typeof METRIC_TABLE)[K]["type"] extends "gauge"
    ? Gauge<LabelOf<K>>
    : Histogram<LabelOf<K>>;

/** One prom-client metric a row of the table, on one registry. */
export type Metrics = { readonly [K in MetricKey]: MetricOf<K> };

/** Makes every metric of the table on the given registry. */
export function createMetrics(registry: Registry): Metrics {
  const entries = (Object.entries(METRIC_TABLE) as [MetricKey, MetricRow][]).map(([key, row]) => [
    key,
    createMetric(row, registry),
  ]);
  return Object.fromEntries(entries) as Metrics;
}

function createMetric(row: MetricRow, registry: Registry): Counter | Gauge | Histogram {
  const options = { name: row.name, help: row.help, labelNames: [...row.labels], registers: [registry] };
  if (row.type === "counter") return new Counter(options);
  if (row.type === "gauge") return new Gauge(options);
  return new Histogram(row.buckets === undefined ? options : { ...options, buckets: [...row.buckets] });
}
