export { runCommandLine } from "./program.js";
export type { CommandIo, ExitStatus } from "./terminal/command-io.js";
