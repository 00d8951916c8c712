import type { StreamConfig } from "@moorline/config";
import type { DeadLetterReason, DecodedEvent, DecodeResult, Decoder } from "./decoder.js";
import { EARLIEST_EVENT_MS, eventTimeOf } from "./event-time.js";
import { BLOCKED, FieldReader, SOME_ABSENT } from "./field-reader.js";
import { nestsDeeperThan } from "./nesting.js";
import { payloadText } from "./payload-text.js";
import { sliceText } from "./slice-text.js";

export interface JsonDecoderLimits {
  /** Larger payloads are `too-large`. Default 1 MiB. */
  readonly maxBytes?: number;
  /** Deeper payloads are `too-deep`. Default 64. */
  readonly maxDepth?: number;
  /** The clock that event times are held against; without one they are not. */
  readonly nowMs?: () => number;
}

export const DEFAULT_MAX_BYTES = 1024 * 1024;
export const DEFAULT_MAX_DEPTH = 64;
const LONGEST_DETAIL = 200;

/** A decoder of JSON objects for one stream. Its answer to a good payload is one object, used again for the next. */
export function createJsonDecoder(stream: StreamConfig, limits: JsonDecoderLimits = {}): Decoder {
  return new JsonDecoder(stream, limits);
}

class JsonDecoder implements Decoder {
  readonly #stream: StreamConfig;
  readonly #maxBytes: number;
  readonly #maxDepth: number;
  readonly #nowMs: (() => number) | null;
  readonly #fields: FieldReader;
  readonly #featureCount: number;
  readonly #sliceCount: number;
  readonly #event: DecodedEvent;
  readonly #ok: DecodeResult;

  constructor(stream: StreamConfig, limits: JsonDecoderLimits) {
    this.#stream = stream;
    this.#maxBytes = limits.maxBytes ?? DEFAULT_MAX_BYTES;
    this.#maxDepth = limits.maxDepth ?? DEFAULT_MAX_DEPTH;
    this.#nowMs = limits.nowMs ?? null;
    this.#featureCount = stream.features.length;
    this.#sliceCount = stream.slices.length;

    const paths = [...stream.features, ...stream.slices].map((field) => field.path);
    if (stream.payload.eventTime !== null) paths.push(stream.payload.eventTime);
    this.#fields = new FieldReader(paths);
    this.#event = {
      eventMs: 0,
      values: new Float64Array(this.#featureCount),
      missing: new Uint8Array(this.#featureCount),
      anyMissing: false,
      slices: stream.slices.map(() => ""),
    };
    this.#ok = { ok: true, event: this.#event };
  }

  decode(payload: Uint8Array | null, recordTimestampMs: number | null): DecodeResult {
    const text = payloadText(payload, this.#maxBytes);
    if (!text.ok) return text;
    if (nestsDeeperThan(text.text, this.#maxDepth)) {
      return refused("too-deep", `nested deeper than ${this.#maxDepth}`);
    }
    let root: unknown;
    try {
      root = JSON.parse(text.text);
    } catch (error) {
      return refused("invalid-json", (error as Error).message);
    }
    if (typeof root !== "object" || root === null || Array.isArray(root)) {
      return refused("not-an-object", `the payload is ${kindOf(root)}`);
    }
    this.#fields.open(root as Record<string, unknown>);
    return this.#takeTime(recordTimestampMs) ?? this.#takeValues() ?? this.#takeSlices();
  }

  #takeTime(recordTimestampMs: number | null): DecodeResult | null {
    const { eventTime, eventTimeUnit } = this.#stream.payload;
    const time =
      eventTime === null
        ? eventTimeOf(recordTimestampMs, "ms")
        : eventTimeOf(plain(this.#fields.read(this.#featureCount + this.#sliceCount)), eventTimeUnit);
    if (!time.ok) return time;

    this.#event.eventMs = time.eventMs;
    return this.#nowMs === null ? null : this.#checkRange(time.eventMs, this.#nowMs());
  }

  #checkRange(eventMs: number, nowMs: number): DecodeResult | null {
    const { maxAgeMs, maxAheadMs } = this.#stream;
    const earliestMs = maxAgeMs === null ? EARLIEST_EVENT_MS : Math.max(EARLIEST_EVENT_MS, nowMs - maxAgeMs);
    if (eventMs >= earliestMs && eventMs <= nowMs + maxAheadMs) return null;

    const side = eventMs < earliestMs ? "before the earliest" : "after the latest";
    const boundMs = eventMs < earliestMs ? earliestMs : nowMs + maxAheadMs;
    return refused("event-time-out-of-range", `${isoOf(eventMs)} is ${side} time taken, ${isoOf(boundMs)}`);
  }

  #takeValues(): DecodeResult | null {
    const { values, missing } = this.#event;
    const wrong = this.#fields.readNumbers(values, missing);
    if (wrong < 0) {
      this.#event.anyMissing = wrong === SOME_ABSENT;
      return null;
    }
    const name = JSON.stringify(this.#stream.features[wrong]!.name);
    return refused("wrong-type", `feature ${name} is ${kindOf(this.#fields.read(wrong))}, not a number`);
  }

  #takeSlices(): DecodeResult {
    const { slices } = this.#event;
    for (let s = 0; s < this.#sliceCount; s++) {
      slices[s] = sliceText(plain(this.#fields.read(this.#featureCount + s)));
    }
    return this.#ok;
  }
}

/** What is behind a barred way is absent, for slices and the event time: only a feature's value must have its type. */
function plain(value: unknown): unknown {
  return value === BLOCKED ? undefined : value;
}

function refused(reason: DeadLetterReason, detail: string): DecodeResult {
  return {
    ok: false,
    reason,
    detail: detail.length > LONGEST_DETAIL ? `${detail.slice(0, LONGEST_DETAIL)}…` : detail,
  };
}

function kindOf(value: unknown): string {
  if (value === null) return "null";
  if (value === BLOCKED) return "below something that is no object";
  if (Array.isArray(value)) return "an array";
  return typeof value === "object" ? "an object" : `a ${typeof value}`;
}

function isoOf(ms: number): string {
  return Math.abs(ms) <= 8.64e15 ? new Date(ms).toISOString() : `${ms} ms`;
}
