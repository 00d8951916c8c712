import { errorRows } from "../error-row.js";

/** Errors raised by gateway. */
export const GATEWAY_ERRORS = errorRows({});
