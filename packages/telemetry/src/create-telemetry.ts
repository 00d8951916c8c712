import type { Logger } from "pino";
import { Registry } from "prom-client";
import { createLogger, type LogFormat } from "./create-logger.js";
import { Health } from "./health.js";
import { createMetrics, type Metrics } from "./metrics.js";

/** What a service is given to speak with: passed in, never imported as a singleton. */
export interface Telemetry {
  readonly logger: Logger;
  readonly registry: Registry;
  readonly metrics: Metrics;
  readonly health: Health;
}

export interface TelemetryOptions {
  /** Named in every log line: `run`, `collector`, `evaluator` or `gateway`. */
  readonly service: string;
  /** Default `info`. */
  readonly logLevel?: string;
  /** Default `json`. */
  readonly logFormat?: LogFormat;
  /** Default standard error: standard output is for what a command was asked for. */
  readonly logDestination?: NodeJS.WritableStream;
}

export function createTelemetry(options: TelemetryOptions): Telemetry {
  const registry = new Registry();
  return {
    logger: createLogger({
      service: options.service,
      level: options.logLevel ?? "info",
      format: options.logFormat ?? "json",
      destination: options.logDestination ?? process.stderr,
    }),
    registry,
    metrics: createMetrics(registry),
    health: new Health(),
  };
}
