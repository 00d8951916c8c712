import { describe, expect, it } from "vitest";
import { eventTimeOf } from "../src/event-time.js";
import { parseIsoTime } from "../src/iso-time.js";

describe("parseIsoTime()", () => {
  it.each([
    "2026-12-01T09:30:15Z",
    "2026-12-01T09:30:15.5Z",
    "2026-12-01T09:30:15.123456Z",
    "2026-12-01T09:30:15+05:30",
    "2024-02-29T23:59:59.999-11:00",
    "2026-12-01T09:30Z",
    "1999-12-31T00:00:00Z",
  ])("parseIsoTime(%s) agrees with Date.parse", (text) => {
    expect(parseIsoTime(text)).toBe(Date.parse(text));
  });

  it.each([
    ["2026-12-01", "2026-12-01T00:00:00Z"],
    ["2026-12-01T09:30:15", "2026-12-01T09:30:15Z"],
    ["2026-12-01 09:30:15.25", "2026-12-01T09:30:15.250Z"],
    ["2026-12-01T09:30:15+0530", "2026-12-01T04:00:15Z"],
    ["2026-12-01T09:30:15-05", "2026-12-01T14:30:15Z"],
    ["2026-12-01t09:30:15,75z", "2026-12-01T09:30:15.750Z"],
    ["2026-12-01T09:30:15.123456789012Z", "2026-12-01T09:30:15.123Z"],
  ])("parseIsoTime(%s) is %s, whatever the machine's time zone", (text, same) => {
    expect(parseIsoTime(text)).toBe(Date.parse(same));
  });

  it.each([
    "",
    "2026",
    "2026-12",
    "2026-13-01",
    "2025-02-29",
    "2026-12-00",
    "0099-01-01",
    "2026-12-01T",
    "2026-12-01T9:30:15Z",
    "2026-12-01T24:00:00Z",
    "2026-12-01T09:60:00Z",
    "2026-12-01T09:30:60Z",
    "2026-12-01T09:30:15.Z",
    "2026-12-01T09:30:15Zx",
    "2026-12-01T09:30:15+5:30",
    "2026-12-01T09:30:15+24:00",
    "2026-12-01T09:30:15 UTC",
    "Tue, 01 Dec 2026 09:30:15 GMT",
    "２０26-12-01T09:30:15Z",
  ])("parseIsoTime(%j) is no time", (text) => {
    expect(parseIsoTime(text)).toBeNull();
  });
});

describe("eventTimeOf()", () => {
  it.each([
    ["s", 1_764_579_600.5, 1_764_579_600_500],
    ["ms", 1_764_579_600_123.9, 1_764_579_600_123],
    ["us", 1_764_579_600_123_456, 1_764_579_600_123],
    ["ns", Number("1764579600123456789"), 1_764_579_600_123],
    ["ms", -1.5, -2],
  ] as const)("eventTimeOf() in %s takes %d as %d ms", (unit, value, eventMs) => {
    expect(eventTimeOf(value, unit)).toEqual({ ok: true, eventMs });
  });

  it.each([Infinity, 1e300, -1e300, "1764579600", true, [], {}])(
    "eventTimeOf() in seconds refuses %j",
    (value) => {
      expect(eventTimeOf(value, "s")).toMatchObject({ ok: false, reason: "event-time-invalid" });
    },
  );
});
