import { errorRows } from "../error-row.js";

/** Errors raised by config. `details.problems` of the first holds every problem with its place. */
export const CONFIG_ERRORS = errorRows({
  MOORLINE_CONFIG_INVALID: {
    category: "CONFIG",
    template: "{file} has {count} that must be put right first",
    hint: "put right each of the problems listed; packages/config/README.md has every key",
  },
  MOORLINE_CONFIG_UNREADABLE: {
    category: "CONFIG",
    template: "the config file {file} cannot be read: {reason}",
    hint: "name an existing file with --config, or start from one of deploy/examples",
  },
  MOORLINE_CONFIG_STREAM_UNKNOWN: {
    category: "CONFIG",
    template: "the config has no stream {stream}; it has {known}",
    hint: "give one of the configured streams, or add this one to the config",
  },
  MOORLINE_CONFIG_FEATURE_UNKNOWN: {
    category: "CONFIG",
    template: "stream {stream} has no feature {feature}; it has {known}",
    hint: "give one of the configured features, or add this one to the config",
  },
});
