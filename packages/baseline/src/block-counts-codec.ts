import { crc32 } from "node:zlib";
import { MoorlineError } from "@moorline/errors";
import type { BlockCounts } from "@moorline/stats";

/** `MLBC`, then a version byte; see docs/block-counts-format.md, the only other place that knows the layout. */
const MAGIC = [0x4d, 0x4c, 0x42, 0x43] as const;
const VERSION = 1;
const HEADER_BYTES = 30;
const CHECKSUM_BYTES = 4;
/** In place of a time where blocks follow the order of the rows. */
const NO_TIME = Number.NaN;

/** Counts by block as bytes: per block events, missing, finite, then what each threshold has more than the one before, all as varints. */
export function encodeBlockCounts(counts: BlockCounts): Uint8Array {
  const { events, missing, finite, atOrBelow } = counts;
  const writer = new VarintWriter(HEADER_BYTES);
  for (let block = 0; block < events.length; block += 1) {
    writer.write(events[block]!);
    writer.write(missing[block]!);
    writer.write(finite[block]!);
    let before = 0;
    for (const hits of atOrBelow) {
      writer.write(hits[block]! - before);
      before = hits[block]!;
    }
  }
  const bytes = writer.finish(CHECKSUM_BYTES);
  const view = new DataView(bytes.buffer);
  bytes.set(MAGIC, 0);
  view.setUint8(4, VERSION);
  view.setUint32(5, bytes.length, true);
  view.setFloat64(9, counts.lengthMs ?? NO_TIME, true);
  view.setFloat64(17, counts.startMs ?? NO_TIME, true);
  view.setUint32(25, events.length, true);
  view.setUint8(29, atOrBelow.length);
  const end = bytes.length - CHECKSUM_BYTES;
  view.setUint32(end, crc32(bytes.subarray(0, end)), true);
  return bytes;
}

/** @throws MOORLINE_FORMAT_BLOCK_COUNTS for anything but bytes that `encodeBlockCounts` made */
export function decodeBlockCounts(bytes: Uint8Array): BlockCounts {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (bytes.length < HEADER_BYTES + CHECKSUM_BYTES) throw broken("too short");
  if (MAGIC.some((byte, i) => bytes[i] !== byte)) throw broken("not block counts");
  if (view.getUint8(4) !== VERSION) throw broken(`version ${view.getUint8(4)}`);
  if (view.getUint32(5, true) !== bytes.length) throw broken("another length than it says");
  const end = bytes.length - CHECKSUM_BYTES;
  if (view.getUint32(end, true) !== crc32(bytes.subarray(0, end))) throw broken("wrong checksum");
  const blocks = view.getUint32(25, true);
  const thresholds = view.getUint8(29);
  if (blocks * (3 + thresholds) > end - HEADER_BYTES) throw broken("fewer counts than it says");
  const reader = new VarintReader(bytes.subarray(0, end), HEADER_BYTES);
  const [events, missing, finite] = [0, 1, 2].map(() => new Float64Array(blocks)) as [
    Float64Array,
    Float64Array,
    Float64Array,
  ];
  const atOrBelow = Array.from({ length: thresholds }, () => new Float64Array(blocks));
  for (let block = 0; block < blocks; block += 1) {
    events[block] = reader.read();
    missing[block] = reader.read();
    finite[block] = reader.read();
    let before = 0;
    for (const hits of atOrBelow) {
      before += reader.read();
      hits[block] = before;
    }
    if (before > finite[block]! || finite[block]! + missing[block]! > events[block]!)
      throw broken(`block ${block} counts more than it holds`);
  }
  if (!reader.atEnd) throw broken("more counts than it says");
  const timeOf = (ms: number) => (Number.isNaN(ms) ? null : ms);
  const lengthMs = timeOf(view.getFloat64(9, true));
  const startMs = timeOf(view.getFloat64(17, true));
  return { lengthMs, startMs, events, missing, finite, atOrBelow };
}

function broken(reason: string): MoorlineError {
  return new MoorlineError("MOORLINE_FORMAT_BLOCK_COUNTS", { reason });
}

class VarintWriter {
  #bytes = new Uint8Array(1_024);
  #at: number;

  constructor(headerBytes: number) {
    this.#at = headerBytes;
  }

  write(value: number): void {
    if (this.#at + 8 > this.#bytes.length) {
      const larger = new Uint8Array(2 * this.#bytes.length);
      larger.set(this.#bytes);
      this.#bytes = larger;
    }
    let rest = value;
    while (rest >= 0x80) {
      this.#bytes[this.#at++] = (rest % 0x80) | 0x80;
      rest = Math.floor(rest / 0x80);
    }
    this.#bytes[this.#at++] = rest;
  }

  finish(spareBytes: number): Uint8Array {
    const whole = new Uint8Array(this.#at + spareBytes);
    whole.set(this.#bytes.subarray(0, this.#at));
    return whole;
  }
}

class VarintReader {
  readonly #bytes: Uint8Array;
  #at: number;

  constructor(bytes: Uint8Array, from: number) {
    this.#bytes = bytes;
    this.#at = from;
  }

  get atEnd(): boolean {
    return this.#at === this.#bytes.length;
  }

  read(): number {
    let value = 0;
    for (let unit = 1; unit < Number.MAX_SAFE_INTEGER; unit *= 0x80) {
      const byte = this.#bytes[this.#at++];
      if (byte === undefined) throw broken("ends within a count");
      value += (byte & 0x7f) * unit;
      if (byte < 0x80) return value;
    }
    throw broken("a count beyond 2^53");
  }
}
