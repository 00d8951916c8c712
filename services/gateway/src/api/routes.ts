import { BASELINE_ROUTES } from "./baseline-routes.js";
import { FEATURE_ROUTES } from "./feature-routes.js";
import { LOGBOOK_ROUTES } from "./logbook-routes.js";
import type { Route } from "./route.js";
import { STREAM_ROUTES } from "./stream-routes.js";

/** Every route under /v1. */
export const ROUTES: readonly Route[] = [
  ...STREAM_ROUTES,
  ...FEATURE_ROUTES,
  ...BASELINE_ROUTES,
  ...LOGBOOK_ROUTES,
];
