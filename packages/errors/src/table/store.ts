import { errorRows } from "../error-row.js";

/** Errors raised by store. */
export const STORE_ERRORS = errorRows({});
