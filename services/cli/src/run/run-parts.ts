import type { MoorlineConfig } from "@moorline/config";

import { createTelemetry } from "@moorline/telemetry";
import type { CommandIo } from "../terminal/command-io.js";
import { checkPort } from "./check-port.js";
import { connectStore } from "./connect-store.js";
import type { Part } from "./parts.js";
import { healthListen, type Services, startServices } from "./start-services.js";
import { aborted } from "./stop-signal.js";

export interface RunOptions {
  readonly config: MoorlineConfig;
  readonly parts: readonly Part[];
  readonly io: CommandIo;
  readonly signal: AbortSignal;
}

/** Runs parts until they are told to stop, end by themselves, or one cannot go on (then it rejects with why). */
export async function runParts(options: RunOptions): Promise<void> {
  const { config, parts, io, signal } = options;
  await checkPorts(config, parts);
  const telemetry = createTelemetry({
    service: parts.length === 1 ? parts[0]! : "run",
    logFormat: io.isTerminal ? "lines" : "json",
    logLevel: io.env["MOORLINE_LOG_LEVEL"] || "info",
  });
  const store = await connectStore(config.store, telemetry.logger, signal);
  try {
    const services = await startServices({ config, store, telemetry, parts });
    telemetry.logger.info({ parts, store: store.kind }, "moorline runs");
    await untilStopped(services, signal);
    telemetry.logger.info("moorline stopped");
  } finally {
    await store.close();
  }
}

/** The port of every listener that these parts open, tried before anything is started. */
export async function checkPorts(config: MoorlineConfig, parts: readonly Part[]): Promise<void> {
  if (parts.includes("gateway")) return checkPort(config.gateway, "GATEWAY");
  const listen = healthListen({ config, parts });
  if (listen !== null) await checkPort(listen, parts.includes("collector") ? "COLLECTOR" : "EVALUATOR");
}

/** Waits for the signal or the services' end, then stops them all. */
export async function untilStopped(services: Services, signal: AbortSignal): Promise<void> {
  try {
    await Promise.race([aborted(signal), services.ended]);
  } finally {
    await services.stop();
  }
}
