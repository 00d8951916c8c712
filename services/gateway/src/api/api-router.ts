import { MoorlineError } from "@moorline/errors";
import { type Request, type Response, Router } from "express";
import type { z } from "zod";
import type { GatewayContext } from "../gateway-context.js";
import { mayChange } from "../http/may-change.js";
import { sendProblem } from "../http/problem.js";
import { openApiDocument } from "./openapi.js";
import type { Answer, Route } from "./route.js";
import { ROUTES } from "./routes.js";

const OPENAPI_PATH = "/v1/openapi.json";

/** Every /v1 route, the document that describes them, and problems for methods and addresses that there are not. */
export function apiRouter(context: GatewayContext): Router {
  const router = Router({ caseSensitive: true, strict: true });
  const document = JSON.stringify(openApiDocument(ROUTES));
  router.get(OPENAPI_PATH, (_request, response) => {
    response.type("application/json").send(document);
  });
  for (const spec of ROUTES) {
    router[spec.method](expressPath(spec.path), (request, response) =>
      answer(context, spec, request, response),
    );
  }
  for (const path of [OPENAPI_PATH, ...new Set(ROUTES.map((spec) => spec.path))]) {
    router.all(expressPath(path), (request, response) => refuseMethod(path, request, response));
  }
  router.all("/v1/{*rest}", (request, response) => {
    sendProblem(response, {
      status: 404,
      title: "Not found",
      detail: `there is nothing at ${request.path.slice(0, 200)}`,
    });
  });
  return router;
}

function expressPath(path: string): string {
  return path.replaceAll(/\{(\w+)\}/g, ":$1");
}

async function answer(
  context: GatewayContext,
  spec: Route,
  request: Request,
  response: Response,
): Promise<void> {
  if (
    spec.changes === true &&
    !mayChange(request, context.config.gateway.host, process.env["MOORLINE_GATEWAY_TOKEN"])
  ) {
    const detail =
      "changing something needs the bearer token of MOORLINE_GATEWAY_TOKEN, or a gateway that listens on the loopback only";
    sendProblem(response, { status: 403, title: "Not allowed", detail });
    return;
  }
  const accepts = request.accepts([...spec.types]) as Answer["type"] | false;
  if (accepts === false) {
    const detail = `this is to be had as ${spec.types.join(", ")}`;
    sendProblem(response, { status: 406, title: "Not acceptable", detail });
    return;
  }
  const result = await spec.handle(context, {
    params: checked(spec.params, request.params, "address"),
    query: checked(spec.query, request.query, "query"),
    body: checked(spec.body, request.body, "body"),
    accepts,
  });
  response.vary("Accept").type(result.type);
  if (result.fileName !== undefined)
    response.attachment(result.fileName.replaceAll(/[^\w.-]+/g, "_")).type(result.type);
  response.send(result.body);
}

/** @throws MOORLINE_INPUT_QUERY naming every field that is wrong */
function checked(schema: z.ZodType | undefined, value: unknown, what: string): unknown {
  if (schema === undefined) return undefined;
  const result = schema.safeParse(value ?? {});
  if (result.success) return result.data;
  const reason = result.error.issues
    .map((issue) => `${what} ${issue.path.join(".")}: ${issue.message}`)
    .join("; ");
  throw new MoorlineError("MOORLINE_INPUT_QUERY", { reason });
}

function refuseMethod(path: string, request: Request, response: Response): void {
  const methods = ROUTES.filter((spec) => spec.path === path).map((spec) => spec.method.toUpperCase());
  const allow = (methods.length > 0 ? methods : ["GET"]).join(", ");
  response.set("Allow", allow);
  const detail = `${request.method} is not to be had here, only ${allow}`;
  sendProblem(response, { status: 405, title: "Method not allowed", detail });
}
