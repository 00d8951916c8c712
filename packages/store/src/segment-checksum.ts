import { crc32 } from "node:zlib";

/** What identifies a segment within its checkpoint. */
interface ChecksummedSegment {
  readonly pane_start_ms: number;
  readonly slice: string;
  readonly events: number;
  readonly body_crc: number;
}

/**
 * The sum of the segments' CRC-32 over pane, slice, events and body checksum: kept with the checkpoint, so that a segment that was
 * taken away, added or altered is found. A sum, because the order in which rows come back is not promised.
 */
export function segmentChecksum(segments: readonly ChecksummedSegment[]): number {
  return segments.reduce((sum, segment) => sum + crcOf(segment), 0);
}

function crcOf({ pane_start_ms, slice, events, body_crc }: ChecksummedSegment): number {
  return crc32(JSON.stringify([pane_start_ms, slice, events, body_crc]));
}
