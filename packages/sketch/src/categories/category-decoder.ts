import { MoorlineError } from "@moorline/errors";
import { ByteReader } from "../codec/byte-reader.js";
import { crc32 } from "../codec/crc32.js";
import type { CategoryState } from "./category-encoder.js";
import * as layout from "./category-layout.js";
import { MOST_CATEGORIES } from "./category-limits.js";
import { categoryName, MOST_NAME_LENGTH } from "./category-name.js";

/** The state that encodeCategories() wrote. Counts are checked against the bytes left before anything is allocated. */
export function decodeCategories(bytes: Uint8Array): CategoryState {
  const limit = readHeader(bytes);
  const reader = new ByteReader(bytes, layout.HEADER_BYTES);
  const missing = reader.varint("the missing count");
  const other = reader.varint("the count of other");
  const known = readList(reader, 0);
  const kept = readList(reader, 1);
  if (reader.left > 0) reader.fail("bytes are left over");
  const names = new Set(known.map(([name]) => name));
  if (kept.some(([name]) => names.has(name))) reader.fail("a category is kept twice");
  if (kept.length > limit) reader.fail("more categories are kept than the limit");
  if (other > 0 && kept.length < limit) reader.fail("events are in other while there is room");
  let events = missing + other;
  for (const [, count] of [...known, ...kept]) events += count;
  if (!Number.isSafeInteger(events)) reader.fail("the counts add up to too much");
  return { limit, missing, other, known, kept };
}

function readHeader(bytes: Uint8Array): number {
  const fail = (reason: string, offset: number): never => {
    throw new MoorlineError("MOORLINE_FORMAT_SKETCH", { reason, offset, length: bytes.length });
  };
  if (bytes.length < layout.HEADER_BYTES) fail("the header is cut off", bytes.length);
  if (!layout.MAGIC.every((byte, i) => bytes[i] === byte)) fail("the magic is missing", 0);
  const version = bytes[layout.VERSION_AT]!;
  if (version !== layout.VERSION) {
    throw new MoorlineError("MOORLINE_FORMAT_SKETCH_VERSION", { version, newest: layout.VERSION });
  }
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (view.getUint32(layout.LENGTH_AT, true) !== bytes.length)
    fail("the length is another", layout.LENGTH_AT);
  const checksum = crc32(bytes, layout.HEADER_BYTES, bytes.length, crc32(bytes, 0, layout.CHECKSUM_AT));
  if (view.getUint32(layout.CHECKSUM_AT, true) !== checksum)
    fail("the checksum is another", layout.CHECKSUM_AT);
  if (bytes[layout.RESERVED_AT] !== 0) fail("a flag is unknown", layout.RESERVED_AT);
  const limit = view.getUint16(layout.LIMIT_AT, true);
  if (limit < 1 || limit > MOST_CATEGORIES) fail("the limit is out of range", layout.LIMIT_AT);
  return limit;
}

/** A category takes two bytes at the least. */
const LEAST_ENTRY_BYTES = 2;
/** UTF-8 takes up to three bytes a code unit. */
const MOST_NAME_BYTES = 3 * MOST_NAME_LENGTH;

function readList(reader: ByteReader, leastCount: number): (readonly [string, number])[] {
  const most = Math.min(MOST_CATEGORIES, Math.floor(reader.left / LEAST_ENTRY_BYTES));
  const length = reader.varint("the number of categories", most);
  const list: (readonly [string, number])[] = [];
  for (let i = 0; i < length; i++) {
    const name = readName(reader);
    if (i > 0 && !(list[i - 1]![0] < name)) reader.fail("the names do not ascend");
    const count = reader.varint("a count");
    if (count < leastCount) reader.fail("a kept category has no event");
    list.push([name, count]);
  }
  return list;
}

const decoder = new TextDecoder("utf-8", { fatal: true, ignoreBOM: true });

function readName(reader: ByteReader): string {
  const bytes = reader.raw("a name", reader.varint("the length of a name", MOST_NAME_BYTES));
  let name: string;
  try {
    name = decoder.decode(bytes);
  } catch {
    return reader.fail("a name is not UTF-8");
  }
  if (categoryName(name) !== name) reader.fail("a name is longer than names are kept");
  return name;
}
