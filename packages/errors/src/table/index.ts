import { BASELINE_ERRORS } from "./baseline.js";
import { CLI_ERRORS } from "./cli.js";
import { COLLECTOR_ERRORS } from "./collector.js";
import { CONFIG_ERRORS } from "./config.js";
import { DECODE_ERRORS } from "./decode.js";
import { GATEWAY_ERRORS } from "./gateway.js";
import { SKETCH_ERRORS } from "./sketch.js";
import { STATS_ERRORS } from "./stats.js";
import { STORE_ERRORS } from "./store.js";

/** Every error that Moorline raises, by code. */
export const ERROR_TABLE = {
  ...SKETCH_ERRORS,
  ...STATS_ERRORS,
  ...CONFIG_ERRORS,
  ...DECODE_ERRORS,
  ...STORE_ERRORS,
  ...BASELINE_ERRORS,
  ...COLLECTOR_ERRORS,
  ...GATEWAY_ERRORS,
  ...CLI_ERRORS,
} as const;

export type ErrorCode = keyof typeof ERROR_TABLE;
