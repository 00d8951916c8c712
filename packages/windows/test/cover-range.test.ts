import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { coverRange, DAY_MS, HOUR_MS } from "../src/index.js";

const MINUTE_MS = 60_000;

describe("coverRange", () => {
  it("takes days in the middle, hours beside them and panes at the edges", () => {
    const fromMs = 20 * DAY_MS + 22 * HOUR_MS + 58 * MINUTE_MS;
    const toMs = 23 * DAY_MS + 2 * HOUR_MS + 3 * MINUTE_MS;
    expect(coverRange({ fromMs, toMs, paneMs: MINUTE_MS, closedThroughMs: toMs })).toEqual([
      { level: "pane", fromMs, toMs: 20 * DAY_MS + 23 * HOUR_MS },
      { level: "hour", fromMs: 20 * DAY_MS + 23 * HOUR_MS, toMs: 21 * DAY_MS },
      { level: "day", fromMs: 21 * DAY_MS, toMs: 23 * DAY_MS },
      { level: "hour", fromMs: 23 * DAY_MS, toMs: 23 * DAY_MS + 2 * HOUR_MS },
      { level: "pane", fromMs: 23 * DAY_MS + 2 * HOUR_MS, toMs },
    ]);
  });

  it("reads what is not closed yet from panes", () => {
    const closedThroughMs = 5 * HOUR_MS + 30 * MINUTE_MS;
    expect(
      coverRange({ fromMs: 4 * HOUR_MS, toMs: 8 * HOUR_MS, paneMs: MINUTE_MS, closedThroughMs }),
    ).toEqual([
      { level: "hour", fromMs: 4 * HOUR_MS, toMs: 5 * HOUR_MS },
      { level: "pane", fromMs: 5 * HOUR_MS, toMs: 8 * HOUR_MS },
    ]);
  });

  it("has no hours where panes do not divide them, and no runs for an empty range", () => {
    const paneMs = 7 * MINUTE_MS;
    const range = { fromMs: 0, toMs: paneMs * 100, paneMs, closedThroughMs: paneMs * 100 };
    expect(coverRange(range)).toEqual([{ level: "pane", fromMs: 0, toMs: paneMs * 100 }]);
    expect(coverRange({ ...range, toMs: 0 })).toEqual([]);
  });

  it("covers every pane of any range exactly once, whatever is closed", () => {
    const minutes = fc.integer({ min: 0, max: 4 * 1_440 });
    fc.assert(
      fc.property(minutes, minutes, minutes, (a, b, closed) => {
        const [fromMs, toMs] = [Math.min(a, b) * MINUTE_MS, Math.max(a, b) * MINUTE_MS];
        const runs = coverRange({ fromMs, toMs, paneMs: MINUTE_MS, closedThroughMs: closed * MINUTE_MS });
        let at = fromMs;
        for (const run of runs) {
          expect(run.fromMs).toBe(at);
          expect(run.toMs).toBeGreaterThan(run.fromMs);
          const unit = run.level === "day" ? DAY_MS : run.level === "hour" ? HOUR_MS : MINUTE_MS;
          expect([run.fromMs % unit, run.toMs % unit]).toEqual([0, 0]);
          if (run.level !== "pane") expect(run.toMs).toBeLessThanOrEqual(closed * MINUTE_MS);
          at = run.toMs;
        }
        expect(at).toBe(toMs);
      }),
      { seed: 20_261_201, numRuns: 500 },
    );
  });
});
