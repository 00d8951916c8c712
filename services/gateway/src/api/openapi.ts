import { OpenAPIRegistry, OpenApiGeneratorV31, type RouteConfig } from "@asteasolutions/zod-to-openapi";
import { problem } from "./answer-schemas.js";
import type { Answer, Route } from "./route.js";
import { z } from "./z.js";

type OpenApiDocument = ReturnType<OpenApiGeneratorV31["generateDocument"]>;

const FAILURES: Readonly<Record<string, string>> = {
  400: "The request cannot be understood",
  403: "Changing something is not allowed here",
  404: "There is no such thing",
  409: "Right request, wrong time",
  503: "The store does not answer; try again",
};

/** The OpenAPI 3.1 document, from the schemas that check the requests. */
export function openApiDocument(routes: readonly Route[]): OpenApiDocument {
  const registry = new OpenAPIRegistry();
  for (const spec of routes) registry.registerPath(pathConfig(spec));
  return new OpenApiGeneratorV31(registry.definitions).generateDocument({
    openapi: "3.1.0",
    info: {
      title: "Moorline",
      version: "1",
      description:
        "Live model inputs held against the training data. Consumers ignore fields that they do not know.",
      license: { name: "Apache-2.0", identifier: "Apache-2.0" },
    },
  });
}

function pathConfig(spec: Route): RouteConfig {
  const codes = Object.entries(FAILURES).filter(([code]) => spec.changes === true || code !== "403");
  return {
    method: spec.method,
    path: spec.path,
    summary: spec.summary,
    operationId: `${spec.method} ${spec.path}`.replaceAll(/[^A-Za-z0-9]+/g, "_").replace(/_$/, ""),
    request: {
      ...(spec.params === undefined ? {} : { params: spec.params as z.ZodObject }),
      ...(spec.query === undefined ? {} : { query: spec.query as z.ZodObject }),
      ...(spec.body === undefined
        ? {}
        : { body: { content: { "application/json": { schema: spec.body } }, required: true } }),
    },
    responses: {
      200: { description: spec.summary, content: contentOf(spec) },
      ...Object.fromEntries(
        codes.map(([code, description]) => [
          code,
          { description, content: { "application/problem+json": { schema: problem } } },
        ]),
      ),
    },
  };
}

function contentOf(spec: Route) {
  const schemaOf = (type: Answer["type"]) => (type === "application/json" ? spec.answer : z.string());
  return Object.fromEntries(spec.types.map((type) => [type, { schema: schemaOf(type) }]));
}
