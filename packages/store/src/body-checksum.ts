import { crc32 } from "node:zlib";

const OWN_CHECKSUM_BYTES = 4;

/**
 * CRC-32 of a segment body up to the checksum that it ends in. With it the result would be the same for every sound body: the CRC of
 * bytes followed by their own CRC is a constant. A body whose own checksum was damaged is refused by `decodeSegmentBody`.
 */
export function bodyChecksum(body: Uint8Array): number {
  return crc32(body.subarray(0, Math.max(0, body.length - OWN_CHECKSUM_BYTES)));
}
