const POLYNOMIAL = 0xedb88320; // reflected IEEE 802.3

/** Eight tables of 256: table k carries a byte on by k further bytes, so that eight bytes are taken at once (Kounavis & Berry 2005, slicing by 8). */
const TABLES = makeTables();

function makeTables(): Uint32Array {
  const tables = new Uint32Array(8 * 256);
  for (let byte = 0; byte < 256; byte++) {
    let crc = byte;
    for (let bit = 0; bit < 8; bit++) crc = crc & 1 ? (crc >>> 1) ^ POLYNOMIAL : crc >>> 1;
    tables[byte] = crc;
  }
  for (let i = 256; i < tables.length; i++) {
    const before = tables[i - 256]!;
    tables[i] = (before >>> 8) ^ tables[before & 0xff]!;
  }
  return tables;
}

/** CRC-32 (IEEE 802.3, as in zlib) of bytes[from, to), continued from `seed`. */
export function crc32(bytes: Uint8Array, from: number, to: number, seed: number = 0): number {
  let crc = ~seed;
  let i = from;
  for (; i + 8 <= to; i += 8) {
    const low = crc ^ (bytes[i]! | (bytes[i + 1]! << 8) | (bytes[i + 2]! << 16) | (bytes[i + 3]! << 24));
    crc =
      TABLES[1_792 + (low & 0xff)]! ^
      TABLES[1_536 + ((low >>> 8) & 0xff)]! ^
      TABLES[1_280 + ((low >>> 16) & 0xff)]! ^
      TABLES[1_024 + (low >>> 24)]! ^
      TABLES[768 + bytes[i + 4]!]! ^
      TABLES[512 + bytes[i + 5]!]! ^
      TABLES[256 + bytes[i + 6]!]! ^
      TABLES[bytes[i + 7]!]!;
  }
  for (; i < to; i++) crc = (crc >>> 8) ^ TABLES[(crc ^ bytes[i]!) & 0xff]!;
  return ~crc >>> 0;
}
