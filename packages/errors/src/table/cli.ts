import { errorRows } from "../error-row.js";

/** Errors raised by cli. */
export const CLI_ERRORS = errorRows({});
