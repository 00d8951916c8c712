import { once } from "node:events";
import { createServer } from "node:http";
import type { AddressInfo } from "node:net";
import type { MoorlineConfig } from "@moorline/config";
import { isMoorlineError } from "@moorline/errors";
import type { Store } from "@moorline/store";
import type { RunningService, Telemetry } from "@moorline/telemetry";
import { gatewayApp } from "./gateway-app.js";

export interface GatewayOptions {
  readonly config: MoorlineConfig;
  readonly store: Store;
  readonly telemetry: Telemetry;
  /** The wall clock, for tests. */
  readonly nowMs?: () => number;
  /** One sentence for every page, such as that the data is invented. */
  readonly notice?: string | null;
}

export interface RunningGateway extends RunningService {
  /** Where it listens: the port that was got, where 0 was asked for. */
  readonly url: string;
}

const PING_EVERY_MS = 5_000;

/** Serves /v1, the page, health and metrics. Rejects when the port cannot be had. */
export async function startGateway(options: GatewayOptions): Promise<RunningGateway> {
  const { config, store, telemetry } = options;
  const app = gatewayApp(
    { config, store, nowMs: options.nowMs ?? Date.now, notice: options.notice ?? null },
    telemetry,
  );
  const server = createServer(app);
  server.listen(config.gateway.port, config.gateway.host);
  await once(server, "listening");
  const { port } = server.address() as AddressInfo;
  const stopWatching = watchStore(store, telemetry);
  const closed = once(server, "close");
  let stopping = false;
  return {
    name: "gateway",
    url: `http://${urlHost(config.gateway.host)}:${port}`,
    ended: closed.then(() => {}),
    stop: async () => {
      if (stopping) return;
      stopping = true;
      stopWatching();
      server.close();
      server.closeIdleConnections();
      // What is being answered gets a moment; a stop must not hang on a client that keeps its connection open.
      const cut = setTimeout(() => server.closeAllConnections(), 1_000);
      await closed;
      clearTimeout(cut);
      telemetry.logger.info("gateway stopped");
    },
  };
}

function urlHost(host: string): string {
  if (host === "0.0.0.0") return "127.0.0.1";
  return host.includes(":") ? `[${host === "::" ? "::1" : host}]` : host;
}

/** Readiness: the store answers. */
function watchStore(store: Store, { health, logger }: Telemetry): () => void {
  health.set("gateway store", "not yet asked");
  const ask = async () => {
    try {
      await store.ping();
      health.set("gateway store", null);
    } catch (error) {
      const reason = isMoorlineError(error) ? error.message : String(error);
      health.set("gateway store", reason);
      logger.warn({ reason }, "the store does not answer the gateway");
    }
  };
  void ask();
  const timer = setInterval(() => void ask(), PING_EVERY_MS);
  timer.unref();
  return () => clearInterval(timer);
}
