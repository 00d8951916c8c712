import { errorRows } from "../error-row.js";

/** Errors raised by baseline. */
export const BASELINE_ERRORS = errorRows({});
