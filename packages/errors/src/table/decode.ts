import { errorRows } from "../error-row.js";

/** Errors raised by decode. */
export const DECODE_ERRORS = errorRows({});
