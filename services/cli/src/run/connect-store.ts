import { setTimeout as sleep } from "node:timers/promises";
import type { StoreConfig } from "@moorline/config";
import { isMoorlineError } from "@moorline/errors";
import { openStore, type Store } from "@moorline/store";
import type { Logger } from "@moorline/telemetry";

/** How long a store may be away at the start: long enough for a database that starts at the same time. */
const CONNECT_WITHIN_MS = 60_000;
const LONGEST_WAIT_MS = 5_000;

/** Opens the store, trying again while it is away. @throws what the store says, once the time is up or trying again is no use */
export async function connectStore(config: StoreConfig, logger: Logger, signal: AbortSignal): Promise<Store> {
  const deadline = performance.now() + CONNECT_WITHIN_MS;
  for (let attempt = 0; ; attempt++) {
    try {
      return await openStore(config);
    } catch (error) {
      const waitMs = Math.min(LONGEST_WAIT_MS, 250 * 2 ** attempt) * (0.5 + Math.random() / 2);
      const retryable = isMoorlineError(error) && error.retryable;
      if (!retryable || performance.now() + waitMs > deadline || signal.aborted) throw error;
      logger.warn({ attempt: attempt + 1, waitMs: Math.round(waitMs) }, error.message);
      await sleep(waitMs, undefined, { signal }).catch(() => undefined);
    }
  }
}
