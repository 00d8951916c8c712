import { describe, expect, it } from "vitest";
import {
  MALFORMED_EVENTS,
  MALFORMED_NOW_MS,
  ODD_BUT_GOOD_EVENTS,
} from "../../../test/fixtures/malformed-events.js";
import { parcelStream } from "../../../test/fixtures/stream-config.js";
import { createJsonDecoder } from "../src/index.js";

const bytes = (text: string) => Buffer.from(text, "utf8");
const nowMs = () => MALFORMED_NOW_MS;

describe("createJsonDecoder(): what cannot be counted", () => {
  it("has a table of at least 40 malformed payloads", () => {
    expect(MALFORMED_EVENTS.length).toBeGreaterThanOrEqual(40);
  });

  it.each(MALFORMED_EVENTS)("decode() refuses $title as $reason", ({ payload, reason }) => {
    const result = createJsonDecoder(parcelStream(), { nowMs }).decode(payload, null);

    expect(result).toMatchObject({ ok: false, reason });
    if (!result.ok) expect(result.detail.length).toBeLessThanOrEqual(201);
  });

  it("decode(null) is empty", () => {
    expect(createJsonDecoder(parcelStream()).decode(null, 5)).toMatchObject({ ok: false, reason: "empty" });
  });

  it("decode() names the feature of a wrong type and what stands there", () => {
    const result = createJsonDecoder(parcelStream()).decode(
      bytes('{"measured_at":"2026-12-01T09:00:00Z","cargo":{"temp":"warm"}}'),
      null,
    );

    expect(result).toEqual({
      ok: false,
      reason: "wrong-type",
      detail: 'feature "cargo_temp" is a string, not a number',
    });
  });

  it("decode() gives no part of a refused event to the next one", () => {
    const decoder = createJsonDecoder(parcelStream());
    decoder.decode(
      bytes('{"measured_at":"2026-12-01T09:00:00Z","cargo":{"temp":9},"door_openings":"x"}'),
      null,
    );
    const result = decoder.decode(bytes('{"measured_at":"2026-12-01T09:00:01Z","depot":"south"}'), null);

    if (!result.ok) throw new Error(result.detail);
    expect([...result.event.missing]).toEqual([1, 1]);
    expect(result.event.anyMissing).toBe(true);
    expect(result.event.slices).toEqual(["south"]);
  });

  it("decode() never throws, whatever bytes come (20,000 mutations, seed 7)", () => {
    const decoder = createJsonDecoder(parcelStream(), { nowMs });
    const good = bytes(
      '{"measured_at":"2026-12-01T09:00:00Z","depot":"north","cargo":{"temp":4.5},"door_openings":2}',
    );
    let state = 7;
    const random = (below: number) => {
      state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
      return Math.floor((state / 2 ** 32) * below);
    };
    let counted = 0;
    for (let i = 0; i < 20_000; i++) {
      const changed = Buffer.from(good.subarray(0, good.length - random(3)));
      for (let k = 0; k < 1 + random(3); k++) changed[random(changed.length)] = random(256);
      if (decoder.decode(changed, null).ok) counted++;
    }

    expect(counted).toBeGreaterThan(100);
    expect(counted).toBeLessThan(19_900);
  });
});

describe("createJsonDecoder(): what counts", () => {
  it.each(ODD_BUT_GOOD_EVENTS)("decode() takes $title", ({ payload, values, depot }) => {
    const result = createJsonDecoder(parcelStream(), { nowMs }).decode(bytes(payload), null);

    if (!result.ok) throw new Error(`${result.reason}: ${result.detail}`);
    const { event } = result;
    expect(values.map((_, f) => (event.missing[f] === 1 ? null : event.values[f]))).toEqual(values);
    expect(event.anyMissing).toBe(values.includes(null));
    expect(event.slices).toEqual([depot]);
  });

  it("decode() takes features called as what every object inherits only when they are the event's own", () => {
    const stream = parcelStream({
      features: ["constructor", "__proto__", "toString", "length"].map((name) => ({
        name,
        kind: "numeric" as const,
        path: [name],
        unit: null,
      })),
    });
    const decoder = createJsonDecoder(stream);
    const absent = decoder.decode(bytes('{"measured_at":"2026-12-01T09:00:00Z"}'), null);
    if (!absent.ok) throw new Error(absent.detail);
    expect([...absent.event.missing]).toEqual([1, 1, 1, 1]);

    const own = decoder.decode(
      bytes('{"measured_at":"2026-12-01T09:00:00Z","constructor":1,"__proto__":2,"toString":3,"length":4}'),
      null,
    );
    if (!own.ok) throw new Error(own.detail);
    expect([...own.event.values]).toEqual([1, 2, 3, 4]);
  });

  it("decode() takes the record's own time when the stream has no event-time path", () => {
    const stream = parcelStream({ payload: { format: "json", eventTime: null, eventTimeUnit: "iso" } });
    const result = createJsonDecoder(stream).decode(bytes("{}"), 1_764_579_600_123);

    expect(result).toMatchObject({ ok: true, event: { eventMs: 1_764_579_600_123 } });
    expect(createJsonDecoder(stream).decode(bytes("{}"), null)).toMatchObject({
      reason: "event-time-missing",
    });
  });

  it("decode() refuses times older than the stream's greatest age, and takes the bound itself", () => {
    const decoder = createJsonDecoder(parcelStream({ maxAgeMs: 3_600_000 }), { nowMs });

    expect(decoder.decode(bytes('{"measured_at":"2026-12-01T09:00:00Z"}'), null)).toMatchObject({ ok: true });
    expect(decoder.decode(bytes('{"measured_at":"2026-12-01T08:59:59.999Z"}'), null)).toMatchObject({
      ok: false,
      reason: "event-time-out-of-range",
    });
    expect(decoder.decode(bytes('{"measured_at":"2026-12-01T11:00:00Z"}'), null)).toMatchObject({ ok: true });
  });
});
