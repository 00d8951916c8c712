import { once } from "node:events";
import { createServer } from "node:http";
import type { AddressInfo } from "node:net";
import express from "express";
import type { Telemetry } from "./create-telemetry.js";
import { healthRouter } from "./health-router.js";

export interface HealthServer {
  readonly port: number;
  stop(): Promise<void>;
}

/** Health and metrics of a service that runs as a process of its own. Rejects when the port cannot be had. */
export async function startHealthServer(
  listen: { readonly host: string; readonly port: number },
  telemetry: Pick<Telemetry, "health" | "registry">,
): Promise<HealthServer> {
  const app = express();
  app.disable("x-powered-by");
  app.use(healthRouter(telemetry));
  const server = createServer(app);
  server.listen(listen.port, listen.host);
  await once(server, "listening");
  return {
    port: (server.address() as AddressInfo).port,
    stop: async () => {
      if (!server.listening) return;
      const closed = once(server, "close");
      server.close();
      server.closeAllConnections();
      await closed;
    },
  };
}
