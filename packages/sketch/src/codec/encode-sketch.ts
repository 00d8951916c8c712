import type { SketchState } from "../sketch-state.js";
import type { ThresholdCounter } from "../threshold-counter.js";
import { ByteWriter } from "./byte-writer.js";
import { crc32 } from "./crc32.js";
import {
  CHECKSUM_AT,
  COMPRESSION_AT,
  FLAG_COMPRESSED,
  FLAG_DESCENDING,
  FLAG_THRESHOLDS,
  FLAGS_AT,
  HEADER_BYTES,
  LENGTH_AT,
  MAGIC,
  VERSION,
  VERSION_AT,
} from "./layout.js";

/** Thousands of sketches are encoded at a checkpoint: they share one scratch array, and each takes a copy of its own length. */
const writer = new ByteWriter(8_192);

/** The bytes of a sealed state, as docs/sketch-format.md says. */
export function encodeState(state: SketchState): Uint8Array {
  writer.restart(HEADER_BYTES + 128 + 11 * state.size);
  writer.skip(HEADER_BYTES);
  const { finite, missing, nan, positiveInfinity, negativeInfinity } = state;
  for (const count of [finite, missing, nan, positiveInfinity, negativeInfinity]) writer.varint(count);
  if (finite > 0) for (const value of [state.min, state.max, state.sum]) writer.float64(value + 0);
  writer.varint(state.atoms.rows.length);
  for (const { value, count, known } of state.atoms.rows) {
    writer.float64(value);
    writer.byte(known ? 1 : 0);
    writer.varint(count);
  }
  if (state.thresholds !== null) writeThresholds(state.thresholds);
  if (state.compressed) writer.varint(state.coarsest);
  writer.varint(state.size);
  for (let i = 0; i < state.size; i++) writer.float64(state.means[i]! + 0);
  for (let i = 0; i < state.size; i++) {
    const weight = state.weights[i]!;
    // Only a compressed sketch has mixed entries, so that an exact one needs no bit for them.
    if (!state.compressed) writer.varint(weight);
    else writer.varint(weight > 0 ? 2 * weight : -2 * weight + 1);
  }
  const bytes = writer.finish();
  writeHeader(bytes, state);
  return bytes;
}

const encoder = new TextEncoder();

function writeThresholds(thresholds: ThresholdCounter): void {
  const id = encoder.encode(thresholds.id);
  writer.varint(id.length);
  writer.raw(id);
  writer.varint(thresholds.values.length);
  for (const value of thresholds.values) writer.float64(value + 0);
  for (const count of thresholds.counts) writer.varint(count);
}

function writeHeader(bytes: Uint8Array<ArrayBuffer>, state: SketchState): void {
  const view = new DataView(bytes.buffer);
  bytes.set(MAGIC, 0);
  bytes[VERSION_AT] = VERSION;
  bytes[FLAGS_AT] =
    (state.compressed ? FLAG_COMPRESSED : 0) |
    (state.descending ? FLAG_DESCENDING : 0) |
    (state.thresholds === null ? 0 : FLAG_THRESHOLDS);
  view.setUint16(COMPRESSION_AT, state.compression, true);
  view.setUint32(LENGTH_AT, bytes.length, true);
  view.setUint32(CHECKSUM_AT, crc32(bytes, HEADER_BYTES, bytes.length, crc32(bytes, 0, CHECKSUM_AT)), true);
}
