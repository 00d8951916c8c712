import type { ErrorCategory, ErrorRow } from "./error-row.js";
import { ERROR_TABLE, type ErrorCode } from "./table/index.js";

export type ErrorDetails = Readonly<Record<string, unknown>>;

/** The one error class. Facts are in `code`, `category`, `retryable` and `details`; `message` is for people. */
export class MoorlineError extends Error {
  readonly code: ErrorCode;
  readonly category: ErrorCategory;
  readonly retryable: boolean;
  readonly hint: string;
  readonly details: ErrorDetails;

  constructor(code: ErrorCode, details: ErrorDetails = {}, options: { cause?: unknown } = {}) {
    const row: ErrorRow = ERROR_TABLE[code];
    super(fill(row.template, details), "cause" in options ? { cause: options.cause } : undefined);
    this.name = "MoorlineError";
    this.code = code;
    this.category = row.category;
    this.retryable = row.retryable ?? false;
    this.hint = fill(row.hint, details);
    this.details = details;
  }
}

/** True for a MoorlineError, from whichever copy of this package it came. Never throws. */
export function isMoorlineError(value: unknown): value is MoorlineError {
  return value instanceof Error && value.name === "MoorlineError" && "code" in value && "category" in value;
}

const LONGEST_DETAIL = 200;

/** Fills `{name}` from the details; control characters are made visible and long values cut, for details may hold stream data. */
function fill(template: string, details: ErrorDetails): string {
  return template.replace(/\{(\w+)\}/g, (_, name: string) => {
    const value = Object.hasOwn(details, name) ? details[name] : "?";
    const text = Array.isArray(value) ? value.join(", ") : String(value);

    const visible = text.replace(/\p{Cc}/gu, (c) => `\\x${c.charCodeAt(0).toString(16).padStart(2, "0")}`);
    return visible.length > LONGEST_DETAIL ? `${visible.slice(0, LONGEST_DETAIL)}…` : visible;
  });
}
