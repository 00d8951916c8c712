import { setTimeout as sleep } from "node:timers/promises";
import { MoorlineError } from "@moorline/errors";
import { describe, expect, it } from "vitest";
import { type RetryPlan, retryUpstream } from "../src/retry-upstream.js";

const away = () => new MoorlineError("MOORLINE_UPSTREAM_DEAD_LETTERS", { target: "t", reason: "away" });

function plan(changes: Partial<RetryPlan> = {}): RetryPlan & { waits: number[] } {
  const waits: number[] = [];
  return { waits, onFailure: (_, __, waitMs) => waits.push(waitMs), isOver: () => false, ...changes };
}

describe("retryUpstream()", () => {
  it("retryUpstream() tries until it works, with waits that grow within their bounds", async () => {
    let calls = 0;
    const seen = plan();
    const result = await retryUpstream(async () => {
      if (++calls < 4) throw away();
      return "done";
    }, seen);

    expect(result).toBe("done");
    expect(seen.waits).toHaveLength(3);
    seen.waits.forEach((wait, i) => {
      expect(wait).toBeGreaterThanOrEqual(50 * 2 ** i);
      expect(wait).toBeLessThanOrEqual(100 * 2 ** i);
    });
  });

  it("retryUpstream() throws at once what no waiting mends", async () => {
    const seen = plan();
    const bug = new TypeError("bug");
    await expect(
      retryUpstream(async () => {
        throw bug;
      }, seen),
    ).rejects.toBe(bug);
    expect(seen.waits).toEqual([]);
  });

  it("retryUpstream() ends with what its heartbeat throws", async () => {
    const lost = new Error("rebalance");
    const attempt = retryUpstream(
      async () => {
        throw away();
      },
      plan({ meanwhile: async () => Promise.reject(lost) }),
    );
    await expect(attempt).rejects.toBe(lost);
  });

  it("retryUpstream() keeps calling its heartbeat while one attempt takes long", async () => {
    let heartbeats = 0;
    const meanwhile = async () => {
      heartbeats++;
    };
    const result = await retryUpstream(() => sleep(1300, "slow"), plan({ meanwhile }));

    expect(result).toBe("slow");
    expect(heartbeats).toBe(2);
  });

  it("retryUpstream() gives up with the last failure once it is over", async () => {
    let calls = 0;
    const attempt = retryUpstream(
      async () => {
        calls++;
        throw away();
      },
      plan({ isOver: () => calls >= 2 }),
    );
    await expect(attempt).rejects.toMatchObject({ code: "MOORLINE_UPSTREAM_DEAD_LETTERS" });
    expect(calls).toBe(2);
  });
});
