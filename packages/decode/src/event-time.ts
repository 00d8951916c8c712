import type { PayloadConfig } from "@moorline/config";
import type { DeadLetterReason } from "./decoder.js";
import { parseIsoTime } from "./iso-time.js";

export type EventTime =
  | { readonly ok: true; readonly eventMs: number }
  | { readonly ok: false; readonly reason: DeadLetterReason; readonly detail: string };

/** Event times before this are a clock that was never set, even where any age is taken. */
export const EARLIEST_EVENT_MS = Date.UTC(1990, 0, 1);

const UNITS_PER_MS = { s: 0.001, ms: 1, us: 1000, ns: 1_000_000 } as const;

const MISSING: EventTime = { ok: false, reason: "event-time-missing", detail: "the event has no event time" };

/** The payload's value at the event-time path to epoch milliseconds, rounded down. */
export function eventTimeOf(value: unknown, unit: PayloadConfig["eventTimeUnit"]): EventTime {
  if (value === undefined || value === null) return MISSING;
  const eventMs = unit === "iso" ? isoMs(value) : countMs(value, UNITS_PER_MS[unit]);
  if (eventMs === null) {
    return {
      ok: false,
      reason: "event-time-invalid",
      detail: `the event time is ${shown(value)}, not ${wanted(unit)}`,
    };
  }
  return { ok: true, eventMs };
}

function isoMs(value: unknown): number | null {
  return typeof value === "string" ? parseIsoTime(value) : null;
}

function countMs(value: unknown, unitsPerMs: number): number | null {
  if (typeof value !== "number") return null;
  const ms = Math.floor(value / unitsPerMs);
  return Number.isSafeInteger(ms) ? ms : null;
}

function wanted(unit: PayloadConfig["eventTimeUnit"]): string {
  return unit === "iso" ? "an ISO 8601 date-time" : `a number of ${unit} since 1970`;
}

function shown(value: unknown): string {
  if (typeof value === "string") return JSON.stringify(value.slice(0, 40));
  if (typeof value === "object") return Array.isArray(value) ? "an array" : "an object";
  return String(value);
}
