import { errorRows } from "../error-row.js";

/** Errors raised by stats. */
export const STATS_ERRORS = errorRows({});
