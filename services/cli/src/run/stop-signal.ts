import type { CommandIo } from "../terminal/command-io.js";

/** What a shell gives for a process that SIGINT ended. */
const EXIT_AT_ONCE = 130;
/** Package managers pass on what the terminal has already sent: signals this close together are one key press. */
const SAME_PRESS_MS = 1_000;

/** Aborts at the first SIGINT or SIGTERM; another one after that ends the process at once. */
export function stopSignal(io: CommandIo): { readonly signal: AbortSignal; release(): void } {
  const controller = new AbortController();
  let firstAtMs = 0;
  const onSignal = () => {
    if (!controller.signal.aborted) {
      firstAtMs = performance.now();
      controller.abort();
      return;
    }
    if (performance.now() - firstAtMs < SAME_PRESS_MS) return;
    io.err("moorline: stopped at once; what was not written yet is read again at the next start\n");
    process.exit(EXIT_AT_ONCE);
  };
  process.on("SIGINT", onSignal);
  process.on("SIGTERM", onSignal);
  return {
    signal: controller.signal,
    release: () => {
      process.off("SIGINT", onSignal);
      process.off("SIGTERM", onSignal);
    },
  };
}

/** Resolves when the signal aborts. */
export function aborted(signal: AbortSignal): Promise<"stop"> {
  return new Promise((resolve) => {
    if (signal.aborted) resolve("stop");
    signal.addEventListener("abort", () => resolve("stop"), { once: true });
  });
}
