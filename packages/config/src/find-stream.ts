import { MoorlineError } from "@moorline/errors";
import type { FeatureConfig, MoorlineConfig, StreamConfig } from "./moorline-config.js";

/** @throws MOORLINE_CONFIG_STREAM_UNKNOWN when the config has no stream of this name */
export function findStream(config: MoorlineConfig, name: string): StreamConfig {
  const stream = config.streams.find((candidate) => candidate.name === name);
  if (stream !== undefined) return stream;
  const known = config.streams.map((candidate) => candidate.name);
  throw new MoorlineError("MOORLINE_CONFIG_STREAM_UNKNOWN", { stream: name, known });
}

/** @throws MOORLINE_CONFIG_FEATURE_UNKNOWN when the stream has no feature of this name */
export function findFeature(stream: StreamConfig, name: string): FeatureConfig {
  const feature = stream.features.find((candidate) => candidate.name === name);
  if (feature !== undefined) return feature;
  const known = stream.features.map((candidate) => candidate.name);
  throw new MoorlineError("MOORLINE_CONFIG_FEATURE_UNKNOWN", { stream: stream.name, feature: name, known });
}
