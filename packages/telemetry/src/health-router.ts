import { Router } from "express";
import type { Telemetry } from "./create-telemetry.js";

/** `/livez`, `/readyz` and `/metrics`, the same in every service. */
export function healthRouter(telemetry: Pick<Telemetry, "health" | "registry">): Router {
  const router = Router();
  router.get("/livez", (_request, response) => {
    response.json({ status: "alive" });
  });
  router.get("/readyz", (_request, response) => {
    const problems = telemetry.health.problems();
    if (problems.length === 0) {
      response.json({ status: "ready" });
      return;
    }
    response
      .status(503)
      .type("application/problem+json")
      .send(
        JSON.stringify({
          type: "about:blank",
          title: "Not ready",
          status: 503,
          detail: problems.map((problem) => `${problem.name}: ${problem.reason}`).join("; "),
          problems,
        }),
      );
  });
  router.get("/metrics", async (_request, response) => {
    response.type(telemetry.registry.contentType).send(await telemetry.registry.metrics());
  });
  return router;
}
