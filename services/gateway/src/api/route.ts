import type { z } from "zod";
import type { GatewayContext } from "../gateway-context.js";

/** What a route answers: one of its media types. */
export interface Answer {
  readonly type: "application/json" | "text/csv" | "image/svg+xml";
  readonly body: string;
  /** Suggested name where it is saved as a file. */
  readonly fileName?: string;
}

/** What a request carried, checked by the route's schemas. */
export interface RouteRequest<P, Q, B> {
  readonly params: P;
  readonly query: Q;
  readonly body: B;
  /** The media type of the route that the client likes best. */
  readonly accepts: Answer["type"];
}

/** One route: the router, the OpenAPI document and the tests are all made from it. */
export interface Route<P = unknown, Q = unknown, B = unknown> {
  readonly method: "get" | "put";
  /** With `{name}` for parameters, as OpenAPI writes them. */
  readonly path: string;
  readonly summary: string;
  readonly params?: z.ZodType<P>;
  readonly query?: z.ZodType<Q>;
  readonly body?: z.ZodType<B>;
  readonly answer: z.ZodType;
  /** The first is the default. */
  readonly types: readonly Answer["type"][];
  /** True for a route that changes something: it asks for the right to. */
  readonly changes?: boolean;
  readonly handle: (context: GatewayContext, request: RouteRequest<P, Q, B>) => Promise<Answer>;
}

/** Keeps the types of a route's schemas for its handler. */
export function route<P, Q, B>(spec: Route<P, Q, B>): Route {
  return spec as unknown as Route;
}

export function json(value: unknown): Answer {
  return { type: "application/json", body: JSON.stringify(value) };
}
