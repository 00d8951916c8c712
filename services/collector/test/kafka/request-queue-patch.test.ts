import { createRequire } from "node:module";
import { setTimeout as sleep } from "node:timers/promises";
import { describe, expect, it } from "vitest";
import { patchRequestQueue } from "../../src/kafka/request-queue-patch.js";

interface Queue {
  throttledUntil: number;
  throttleCheckTimeoutId: unknown;
  readonly pending: unknown[];
  scheduleCheckPendingRequests(): void;
  push(request: unknown): void;
  maybeThrottle(ms: number): void;
  destroy(): void;
}

const RequestQueue = createRequire(import.meta.url)("kafkajs/src/network/requestQueue") as new (
  options: object,
) => Queue;
const silent = { debug() {}, warn() {} };

function queue(): Queue {
  patchRequestQueue();
  return new RequestQueue({
    maxInFlightRequests: null,
    requestTimeout: 1000,
    enforceRequestTimeout: false,
    clientId: "test",
    broker: "none",
    logger: silent,
  });
}

describe("patchRequestQueue()", () => {
  it("patchRequestQueue() leaves an idle queue without a timer", () => {
    const idle = queue();
    idle.scheduleCheckPendingRequests();
    expect(idle.throttleCheckTimeoutId).toBeNull();
  });

  it("patchRequestQueue() sends a throttled request when the throttle ends", async () => {
    const throttled = queue();
    let sent = 0;
    throttled.maybeThrottle(40);
    throttled.push({
      entry: { correlationId: 1 },
      expectResponse: true,
      sendRequest: () => {
        sent++;
      },
    });

    expect(sent).toBe(0);
    await sleep(150);
    expect(sent).toBe(1);
    expect(throttled.throttleCheckTimeoutId).toBeNull();
    throttled.destroy();
  });
});
