import { type ErrorCategory, isMoorlineError, type MoorlineError } from "@moorline/errors";
import type { Logger } from "@moorline/telemetry";
import type { ErrorRequestHandler, Response } from "express";

export interface Problem {
  readonly status: number;
  readonly title: string;
  readonly detail: string;
  readonly hint?: string;
  readonly code?: string;
}

/** Problem details (RFC 9457). */
export function sendProblem(response: Response, problem: Problem): void {
  response
    .status(problem.status)
    .type("application/problem+json")
    .send(JSON.stringify({ type: "about:blank", ...problem }));
}

const STATUS: Record<ErrorCategory, number> = {
  INPUT: 400,
  STATE: 404,
  FORMAT: 500,
  UPSTREAM: 503,
  CONFIG: 500,
  INTERNAL: 500,
};

const TITLE: Readonly<Record<number, string>> = {
  400: "Bad request",
  403: "Not allowed",
  404: "Not found",
  413: "Too large",
  415: "Unsupported media type",
  500: "Internal error",
  503: "Not available",
};

/** Codes whose category does not tell the status: right request, wrong time. */
const CONFLICTS: ReadonlySet<string> = new Set([
  "MOORLINE_STATE_BASELINE_NOT_ACTIVE",
  "MOORLINE_STATE_BASELINE_AMBIGUOUS",
]);

/** Every error as problem+json. What a parser or driver said is never echoed: it may hold what it choked on. */
export function problemHandler(logger: Logger): ErrorRequestHandler {
  return (error: unknown, request, response, next) => {
    if (response.headersSent) {
      next(error);
      return;
    }
    const problem = isMoorlineError(error) ? moorlineProblem(error) : foreignProblem(error);
    if (problem.status >= 500)
      logger.error({ err: error, method: request.method, path: request.path }, "a request failed");
    sendProblem(response, problem);
  };
}

function moorlineProblem(error: MoorlineError): Problem {
  const status = CONFLICTS.has(error.code) ? 409 : STATUS[error.category];
  return {
    status,
    title: TITLE[status] ?? "Conflict",
    detail: error.message,
    hint: error.hint,
    code: error.code,
  };
}

/** Errors of the web framework carry a status; the text is ours. */
function foreignProblem(error: unknown): Problem {
  const { status, type } = (typeof error === "object" && error !== null ? error : {}) as {
    status?: number;
    type?: string;
  };
  if (error instanceof URIError || status === 400) {
    const detail =
      type === "entity.parse.failed" ? "the body is not JSON" : "the address or body cannot be decoded";
    return { status: 400, title: TITLE[400]!, detail };
  }
  if (status === 413) return { status, title: TITLE[413]!, detail: "the body is larger than 100 kB" };
  if (status === 415) return { status, title: TITLE[415]!, detail: "send the body as application/json" };
  return { status: 500, title: TITLE[500]!, detail: "something went wrong here; it is in the log" };
}
