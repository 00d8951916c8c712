import { isAscii, isUtf8 } from "node:buffer";
import type { DeadLetterReason } from "./decoder.js";

export type PayloadText =
  | { readonly ok: true; readonly text: string }
  | { readonly ok: false; readonly reason: DeadLetterReason; readonly detail: string };

const EMPTY: PayloadText = { ok: false, reason: "empty", detail: "the payload has no bytes" };
const NOT_UTF8: PayloadText = { ok: false, reason: "invalid-utf8", detail: "the payload is not UTF-8 text" };

/** Bytes to text, or why they are none. UTF-8 is checked whole: a replaced character would be another value. */
export function payloadText(payload: Uint8Array | null, maxBytes: number): PayloadText {
  if (payload === null || payload.length === 0) return EMPTY;
  if (payload.length > maxBytes) {
    return { ok: false, reason: "too-large", detail: `${payload.length} bytes, the limit is ${maxBytes}` };
  }
  const bytes = Buffer.isBuffer(payload)
    ? payload
    : Buffer.from(payload.buffer, payload.byteOffset, payload.byteLength);

  // Latin-1 of ASCII bytes is the same text and a plain copy, several times cheaper than UTF-8 decoding.
  if (isAscii(bytes)) return { ok: true, text: bytes.toString("latin1") };
  return isUtf8(bytes) ? { ok: true, text: bytes.toString("utf8") } : NOT_UTF8;
}
