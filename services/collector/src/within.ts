import { setTimeout as sleep } from "node:timers/promises";

/** Waits for something at most this long, whatever becomes of it. */
export async function within(ms: number, promise: Promise<unknown>): Promise<void> {
  const timer = new AbortController();
  const settled = promise.then(
    () => timer.abort(),
    () => timer.abort(),
  );
  await Promise.race([settled, sleep(ms, undefined, { signal: timer.signal }).catch(() => {})]);
}
