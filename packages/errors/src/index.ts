export type { ErrorCategory, ErrorRow } from "./error-row.js";
export { type ErrorDetails, isMoorlineError, MoorlineError } from "./moorline-error.js";
export { ERROR_TABLE, type ErrorCode } from "./table/index.js";
