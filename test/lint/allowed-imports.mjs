/** What each package and service may import of the others: the table of DEVELOPERS.md. `*` is every package under packages/. */
export const ALLOWED_IMPORTS = {
  errors: [],
  sketch: ["errors"],
  stats: ["errors"],
  config: ["errors"],
  decode: ["errors", "config"],
  store: ["errors", "sketch"],
  windows: ["errors", "sketch", "store"],
  baseline: ["errors", "sketch", "stats", "store", "config", "windows"],
  answers: ["errors", "sketch", "stats", "store", "config", "windows", "baseline"],
  figures: ["errors", "stats"],
  telemetry: ["errors"],
  collector: ["*"],
  evaluator: ["*"],
  gateway: ["*"],
  cli: ["*", "collector", "evaluator", "gateway"],
};

/** Pure code: no clock, no I/O; the one exception loads the kernel's bytes. */
export const PURE_PACKAGES = { sketch: ["src/kernel/"], stats: [] };
