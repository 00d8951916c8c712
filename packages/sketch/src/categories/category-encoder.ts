import { ByteWriter } from "../codec/byte-writer.js";
import { crc32 } from "../codec/crc32.js";
import * as layout from "./category-layout.js";

/** What is written of a sketch; names ascend. */
export interface CategoryState {
  readonly limit: number;
  readonly missing: number;
  readonly other: number;
  readonly known: readonly (readonly [name: string, count: number])[];
  readonly kept: readonly (readonly [name: string, count: number])[];
}

const writer = new ByteWriter(8_192);
const encoder = new TextEncoder();

/** The bytes of a state, as docs/category-format.md says. */
export function encodeCategories({ limit, missing, other, known, kept }: CategoryState): Uint8Array {
  writer.restart(layout.HEADER_BYTES + 32 + 16 * (known.length + kept.length));
  writer.skip(layout.HEADER_BYTES);
  writer.varint(missing);
  writer.varint(other);
  for (const list of [known, kept]) {
    writer.varint(list.length);
    for (const [name, count] of list) {
      const bytes = encoder.encode(name);
      writer.varint(bytes.length);
      writer.raw(bytes);
      writer.varint(count);
    }
  }
  const bytes = writer.finish();
  const view = new DataView(bytes.buffer);
  bytes.set(layout.MAGIC, 0);
  bytes[layout.VERSION_AT] = layout.VERSION;
  bytes[layout.RESERVED_AT] = 0;
  view.setUint16(layout.LIMIT_AT, limit, true);
  view.setUint32(layout.LENGTH_AT, bytes.length, true);
  const header = crc32(bytes, 0, layout.CHECKSUM_AT);
  view.setUint32(layout.CHECKSUM_AT, crc32(bytes, layout.HEADER_BYTES, bytes.length, header), true);
  return bytes;
}
