import { describe, expect, it } from "vitest";
import { parseTimePoint, parseTimeRange } from "../src/terminal/time-point.js";

const words = { firstMs: 1_000_000, lastMs: 90_000_000, nowMs: 100_000_000 };
const point = (text: string) => parseTimePoint("pairs", "--from", text, words);

describe("parseTimePoint", () => {
  it.each([
    ["first", 1_000_000],
    ["first+1m", 1_060_000],
    ["last", 90_000_000],
    ["last-1h", 86_400_000],
    ["now-90s", 99_910_000],
    ["2026-05-01", Date.UTC(2026, 4, 1)],
    ["2026-05-01T12:30", Date.UTC(2026, 4, 1, 12, 30)],
    ["2026-05-01T12:30:15.250Z", Date.UTC(2026, 4, 1, 12, 30, 15, 250)],
    ["2026-05-01T12:30+02:00", Date.UTC(2026, 4, 1, 10, 30)],
  ])("parseTimePoint(%s) is %d", (text, ms) => {
    expect(point(text)).toBe(ms);
  });

  it.each(["", "yesterday", "last-", "last-1", "last*1h", "2026-13-01", "2026-05-01T25:00", "12:30", "5"])(
    "parseTimePoint(%j) is refused with what is wanted",
    (text) => {
      expect(() => point(text)).toThrow(/--from is .* which is not a time such as/);
    },
  );
});

describe("parseTimeRange", () => {
  it("takes FROM..TO, and refuses an empty or reversed range", () => {
    expect(parseTimeRange("x", "--r", "first..last-1h", words)).toEqual({
      fromMs: 1_000_000,
      toMs: 86_400_000,
    });
    for (const text of ["last..first", "last..last", "last", "a..b..c"]) {
      expect(() => parseTimeRange("x", "--r", text, words)).toThrow(/--r is/);
    }
  });
});
