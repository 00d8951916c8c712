import type { ListenConfig, MoorlineConfig } from "@moorline/config";
import type { Store } from "@moorline/store";
import { type RunningService, startHealthServer, type Telemetry } from "@moorline/telemetry";
import type { Part } from "./parts.js";

export interface Services {
  /** Rejects as soon as a part cannot go on; resolves when every part that can end by itself has. */
  readonly ended: Promise<void>;
  stop(): Promise<void>;
}

export interface StartOptions {
  readonly config: MoorlineConfig;
  readonly store: Store;
  readonly telemetry: Telemetry;
  readonly parts: readonly Part[];
  /** One sentence for every page. */
  readonly notice?: string;
}

/** A process loads only the parts that it runs. */
const START: Readonly<Record<Part, (options: StartOptions) => Promise<RunningService>>> = {
  gateway: async (options) => {
    const { startGateway } = await import("@moorline/gateway");
    const gateway = await startGateway(options);
    options.telemetry.logger.info({ url: gateway.url }, "gateway answers");
    return gateway;
  },
  evaluator: async (options) => (await import("@moorline/evaluator")).startEvaluator(options),
  collector: async (options) => (await import("@moorline/collector")).startCollector(options),
};

/** Starts the parts: gateway first, so that readiness can be asked for; the collector last. They stop the other way round. */
export async function startServices(options: StartOptions): Promise<Services> {
  const running: { readonly stop: () => Promise<unknown>; readonly ended?: Promise<void> }[] = [];
  const stop = async (): Promise<void> => {
    const failures: unknown[] = [];
    for (const service of running.reverse()) await service.stop().catch((error) => failures.push(error));
    running.length = 0;
    if (failures.length > 0) throw failures[0];
  };
  try {
    const health = healthListen(options);
    if (health !== null) running.push(await startHealthServer(health, options.telemetry));
    for (const part of options.parts) {
      running.push(await START[part](options));
    }
  } catch (error) {
    await stop().catch(() => undefined);
    throw error;
  }
  const ended = Promise.all(running.map((service) => service.ended)).then(() => undefined);
  ended.catch(() => undefined);
  return { ended, stop };
}

/** Without the gateway in this process, health and metrics have a port of their own. */
export function healthListen({ config, parts }: Pick<StartOptions, "config" | "parts">): ListenConfig | null {
  if (parts.includes("gateway")) return null;
  return parts.includes("collector") ? config.collector : config.evaluator;
}
