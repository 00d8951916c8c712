import { healthRouter, type Telemetry } from "@moorline/telemetry";
import express, { type Express } from "express";
import helmet from "helmet";
import { apiRouter } from "./api/api-router.js";
import type { GatewayContext } from "./gateway-context.js";
import { problemHandler, sendProblem } from "./http/problem.js";
import { pageRouter } from "./pages/page-router.js";

/** The whole HTTP face, without a listening socket. */
export function gatewayApp(context: GatewayContext, telemetry: Telemetry): Express {
  const app = express();
  app.disable("x-powered-by");
  app.set("query parser", "simple");
  app.use(
    helmet({
      contentSecurityPolicy: {
        useDefaults: false,
        directives: {
          defaultSrc: ["'none'"],
          scriptSrc: ["'self'"],
          styleSrc: ["'self'"],
          imgSrc: ["'self'"],
          connectSrc: ["'self'"],
          formAction: ["'self'"],
          baseUri: ["'none'"],
          frameAncestors: ["'none'"],
        },
      },
      // Moorline is often served without TLS behind a proxy that has it; the proxy says so then.
      strictTransportSecurity: false,
    }),
  );
  app.use(healthRouter(telemetry));
  app.use(express.json({ limit: "100kb" }));
  app.use(apiRouter(context));
  app.use(pageRouter(context));
  app.use((request, response) => {
    sendProblem(response, {
      status: 404,
      title: "Not found",
      detail: `there is nothing at ${request.path.slice(0, 200)}`,
    });
  });
  app.use(problemHandler(telemetry.logger));
  return app;
}
