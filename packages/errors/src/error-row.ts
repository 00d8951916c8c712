/** Where an error comes from and, with that, where it ends (see the package README). */
export type ErrorCategory = "CONFIG" | "INPUT" | "STATE" | "FORMAT" | "UPSTREAM" | "INTERNAL";

/** One row of the error table. A code is never reused for another meaning. */
export interface ErrorRow {
  readonly category: ErrorCategory;
  /** What is wrong, one sentence without a full stop; `{name}` is filled from `details.name`. */
  readonly template: string;
  /** What to do, one sentence without a full stop; `{name}` is filled as in the template. */
  readonly hint: string;
  /** May the same call succeed later without a change? Default: false. */
  readonly retryable?: boolean;
}

/** Keeps the literal keys of a table part while checking its rows. */
export function errorRows<const T extends Record<`MOORLINE_${string}`, ErrorRow>>(rows: T): T {
  return rows;
}
