import { errorRows } from "../error-row.js";

/** Errors raised by config. */
export const CONFIG_ERRORS = errorRows({});
