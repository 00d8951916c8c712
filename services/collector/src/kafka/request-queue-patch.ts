import { createRequire } from "node:module";

interface RequestQueue {
  throttledUntil: number;
  throttleCheckTimeoutId: NodeJS.Timeout | null;
  readonly pending: { readonly length: number };
  checkPendingRequests(): void;
}

/** How long requests wait that are held back by too many in flight; an answer sends them sooner. */
const CHECK_EVERY_MS = 10;

/**
 * kafkajs 2.2.4 looks at its queue of waiting requests with a timer that sets itself again for ever, with a negative delay: some 5,300
 * wake-ups a second of an idle consumer, and a warning on newer Node. Here it is set only while something waits.
 */
export function patchRequestQueue(): void {
  const { prototype } = createRequire(import.meta.url)("kafkajs/src/network/requestQueue") as {
    prototype: RequestQueue & { scheduleCheckPendingRequests(): void };
  };
  prototype.scheduleCheckPendingRequests = function schedule(this: RequestQueue): void {
    if (this.throttleCheckTimeoutId !== null || this.pending.length === 0) return;
    const waitMs = Math.max(this.throttledUntil - Date.now(), CHECK_EVERY_MS);
    this.throttleCheckTimeoutId = setTimeout(() => {
      this.throttleCheckTimeoutId = null;
      this.checkPendingRequests();
    }, waitMs);
  };
}
