#!/usr/bin/env node
import { runCommandLine } from "./program.js";
import { processIo } from "./terminal/command-io.js";

// A reader that has seen enough (`moorline … | head`) closes the pipe: that is an end, not a failure.
process.stdout.on("error", (error: NodeJS.ErrnoException) => {
  if (error.code === "EPIPE") process.exit(0);
  throw error;
});

process.exitCode = await runCommandLine(process.argv.slice(2), processIo());
