/** Why an event could not be counted. Bounded: these are label values and stand in the logbook and the dead letters. */
export const DEAD_LETTER_REASONS = [
  "empty",
  "too-large",
  "invalid-utf8",
  "invalid-json",
  "too-deep",
  "not-an-object",
  "event-time-missing",
  "event-time-invalid",
  "event-time-out-of-range",
  "wrong-type",
] as const;

export type DeadLetterReason = (typeof DEAD_LETTER_REASONS)[number];

/** What the decoder makes of one payload. The object is used again for the next event: copy what is kept. */
export interface DecodedEvent {
  eventMs: number;
  /** One value a configured feature, in config order; `NaN`, `±Infinity` as they came; `MISSING` marks are in `missing`. */
  readonly values: Float64Array;
  /** 1 where the feature is absent or null, else 0. */
  readonly missing: Uint8Array;
  /** Is there a 1 in `missing`? */
  anyMissing: boolean;
  /** One value a configured slice key, in config order; `(none)` where it is absent. Bounded in length. */
  readonly slices: string[];
}

export type DecodeResult =
  | { readonly ok: true; readonly event: DecodedEvent }
  | { readonly ok: false; readonly reason: DeadLetterReason; readonly detail: string };

/** Bytes to one event. Never throws, whatever the bytes. */
export interface Decoder {
  decode(payload: Uint8Array | null, recordTimestampMs: number | null): DecodeResult;
}
