const POLYNOMIAL = 0xedb88320; // reflected IEEE 802.3

const TABLE = Uint32Array.from({ length: 256 }, (_, byte) => {
  let crc = byte;
  for (let bit = 0; bit < 8; bit++) crc = crc & 1 ? (crc >>> 1) ^ POLYNOMIAL : crc >>> 1;
  return crc >>> 0;
});

/** CRC-32 (IEEE 802.3, as in zlib) of bytes[from, to), continued from `seed`. */
export function crc32(bytes: Uint8Array, from: number, to: number, seed: number = 0): number {
  let crc = ~seed;
  for (let i = from; i < to; i++) crc = (crc >>> 8) ^ TABLE[(crc ^ bytes[i]!) & 0xff]!;
  return ~crc >>> 0;
}
