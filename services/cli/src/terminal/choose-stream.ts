import { findStream, type MoorlineConfig, type StreamConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";

/** The stream that --stream names; a config with one stream needs no name. */
export function chooseStream(
  config: MoorlineConfig,
  command: string,
  name: string | undefined,
): StreamConfig {
  if (name !== undefined) return findStream(config, name);
  if (config.streams.length === 1) return config.streams[0]!;
  throw new MoorlineError("MOORLINE_INPUT_OPTION", {
    command,
    option: "--stream",
    value: "not given",
    wanted: `one of ${config.streams.map((stream) => stream.name).join(", ")}`,
  });
}
