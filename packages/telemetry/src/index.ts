export type { Logger } from "pino";
export type { LogFormat } from "./create-logger.js";
export { createTelemetry, type Telemetry, type TelemetryOptions } from "./create-telemetry.js";
export { Health, type HealthProblem } from "./health.js";
export { healthRouter } from "./health-router.js";
export { METRIC_TABLE, type MetricKey, type MetricRow } from "./metric-table.js";
export { createMetrics, type Metrics } from "./metrics.js";
export type { RunningService } from "./running-service.js";
export { type HealthServer, startHealthServer } from "./start-health-server.js";
