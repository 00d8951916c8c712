import type { MoorlineConfig, StreamConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { Store } from "@moorline/store";

/** What every route and page answers from. */
export interface GatewayContext {
  readonly config: MoorlineConfig;
  readonly store: Store;
  readonly nowMs: () => number;
  /** One sentence shown on every page, for data that must not be taken for real; null for none. */
  readonly notice: string | null;
}

/** @throws MOORLINE_STATE_UNKNOWN_STREAM */
export function streamOf(context: GatewayContext, name: string): StreamConfig {
  const stream = context.config.streams.find((one) => one.name === name);
  if (stream === undefined) throw new MoorlineError("MOORLINE_STATE_UNKNOWN_STREAM", { stream: name });
  return stream;
}

/** @throws MOORLINE_STATE_UNKNOWN_FEATURE */
export function featureOf(stream: StreamConfig, name: string): StreamConfig["features"][number] {
  const feature = stream.features.find((one) => one.name === name);
  if (feature === undefined)
    throw new MoorlineError("MOORLINE_STATE_UNKNOWN_FEATURE", { stream: stream.name, feature: name });
  return feature;
}
