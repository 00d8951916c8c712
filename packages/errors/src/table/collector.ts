import { errorRows } from "../error-row.js";

/** Errors raised by collector. */
export const COLLECTOR_ERRORS = errorRows({});
