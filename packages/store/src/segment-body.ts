import { crc32 } from "node:zlib";
import { MoorlineError } from "@moorline/errors";
import { fromStoredText, toStoredText } from "./stored-text.js";

/** `MLSG`, then a version byte; see docs/segment-format.md, the only other place that knows the layout. */
const MAGIC = [0x4d, 0x4c, 0x53, 0x47] as const;
const VERSION = 1;
const HEADER_BYTES = 13;
const CHECKSUM_BYTES = 4;
const LONGEST_NAME_BYTES = 65_535;

/**
 * All features of one pane and slice as one block of bytes: a directory of names, each with the bytes of its encoded sketch.
 *
 * @throws MOORLINE_INPUT_SEGMENT_BODY when a name stands twice or is too long
 */
export function encodeSegmentBody(
  sketches: Iterable<readonly [feature: string, sketch: Uint8Array]>,
): Uint8Array {
  const encoder = new TextEncoder();
  const entries = [...sketches].map(([feature, sketch]) => ({
    feature,
    name: encoder.encode(toStoredText(feature)),
    sketch,
  }));
  checkNames(entries);
  const length = entries.reduce(
    (sum, { name, sketch }) => sum + 2 + name.length + 4 + sketch.length,
    HEADER_BYTES + CHECKSUM_BYTES,
  );
  const bytes = new Uint8Array(length);
  const view = new DataView(bytes.buffer);
  bytes.set(MAGIC, 0);
  view.setUint8(4, VERSION);
  view.setUint32(5, length, true);
  view.setUint32(9, entries.length, true);
  let at = HEADER_BYTES;
  for (const { name, sketch } of entries) {
    view.setUint16(at, name.length, true);
    bytes.set(name, at + 2);
    at += 2 + name.length;
    view.setUint32(at, sketch.length, true);
    bytes.set(sketch, at + 4);
    at += 4 + sketch.length;
  }
  view.setUint32(at, crc32(bytes.subarray(0, at)), true);
  return bytes;
}

function checkNames(entries: readonly { readonly feature: string; readonly name: Uint8Array }[]): void {
  const seen = new Set<string>();
  for (const { feature, name } of entries) {
    if (seen.has(feature))
      throw new MoorlineError("MOORLINE_INPUT_SEGMENT_BODY", { reason: `feature ${feature} stands twice` });
    if (name.length > LONGEST_NAME_BYTES) {
      throw new MoorlineError("MOORLINE_INPUT_SEGMENT_BODY", { reason: `a name of ${name.length} bytes` });
    }
    seen.add(feature);
  }
}

/**
 * The directory of a segment body; the sketch bytes are views into `bytes`, not copies, and are not decoded.
 *
 * @throws MOORLINE_FORMAT_SEGMENT_BODY for anything but the exact bytes that `encodeSegmentBody` wrote
 */
export function decodeSegmentBody(bytes: Uint8Array): Map<string, Uint8Array> {
  const fail = (reason: string, offset: number): never => {
    throw new MoorlineError("MOORLINE_FORMAT_SEGMENT_BODY", { reason, offset, length: bytes.length });
  };
  if (bytes.length < HEADER_BYTES + CHECKSUM_BYTES) fail("it is too short", 0);
  if (MAGIC.some((byte, index) => bytes[index] !== byte)) fail("it does not start with MLSG", 0);
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (view.getUint8(4) !== VERSION) fail(`version ${view.getUint8(4)} is not known`, 4);
  if (view.getUint32(5, true) !== bytes.length) fail(`its length should be ${view.getUint32(5, true)}`, 5);
  const end = bytes.length - CHECKSUM_BYTES;
  if (view.getUint32(end, true) !== crc32(bytes.subarray(0, end))) fail("the checksum does not match", end);
  const count = view.getUint32(9, true);
  const decoder = new TextDecoder("utf-8", { fatal: true, ignoreBOM: true });
  const features = new Map<string, Uint8Array>();
  let at = HEADER_BYTES;
  for (let index = 0; index < count; index++) {
    const nameLength = at + 2 <= end ? view.getUint16(at, true) : fail("a name is cut off", at);
    const nameEnd = at + 2 + nameLength;
    const sketchLength = nameEnd + 4 <= end ? view.getUint32(nameEnd, true) : fail("a name is cut off", at);
    const sketchEnd = nameEnd + 4 + sketchLength;
    if (sketchEnd > end) fail("a sketch is cut off", nameEnd);
    const name =
      decodeName(decoder, bytes.subarray(at + 2, nameEnd)) ??
      fail("a name is not written as names are", at + 2);
    if (features.has(name)) fail("a name stands twice", at + 2);
    features.set(name, bytes.subarray(nameEnd + 4, sketchEnd));
    at = sketchEnd;
  }
  if (at !== end) fail("bytes are left over", at);
  return features;
}

function decodeName(decoder: InstanceType<typeof TextDecoder>, bytes: Uint8Array): string | null {
  try {
    const stored = decoder.decode(bytes);
    const name = fromStoredText(stored);
    return toStoredText(name) === stored ? name : null;
  } catch {
    return null;
  }
}
