import zlib from "node:zlib";
import { MoorlineError } from "@moorline/errors";
import * as fzstd from "fzstd";
import kafkajs from "kafkajs";
import { compressFrameSync, decompressFrameSync } from "lz4-napi";
import snappy from "snappy";

interface Codec {
  compress(encoder: { buffer: Buffer }): Promise<Buffer>;
  decompress(buffer: Buffer): Promise<Buffer>;
}

/** Java's producers frame snappy blocks: this mark, two versions, then blocks with their lengths. */
const XERIAL_MARK = Buffer.from([0x82, 0x53, 0x4e, 0x41, 0x50, 0x50, 0x59, 0x00]);
const XERIAL_HEADER_BYTES = 16;

/** Makes every codec of Kafka known to kafkajs, which knows gzip alone: a missing one ends the consumer for good. */
export function registerCodecs(): void {
  // By the default export: Node cannot see this name in the CommonJS module.
  const { CompressionCodecs, CompressionTypes } = kafkajs;
  CompressionCodecs[CompressionTypes.Snappy] = () => snappyCodec;
  CompressionCodecs[CompressionTypes.LZ4] = () => lz4Codec;
  CompressionCodecs[CompressionTypes.ZSTD] = () => zstdCodec;
}

export const snappyCodec: Codec = {
  compress: async ({ buffer }) => snappy.compressSync(buffer),
  decompress: async (buffer) => readable("snappy", () => uncompressSnappy(buffer)),
};

export const lz4Codec: Codec = {
  compress: async ({ buffer }) => compressFrameSync(buffer),
  decompress: async (buffer) => readable("lz4", () => decompressFrameSync(buffer)),
};

export const zstdCodec: Codec = {
  compress: async () => {
    throw new MoorlineError("MOORLINE_FORMAT_COMPRESSED_BATCH", {
      codec: "zstd",
      reason: "this program only reads zstd",
    });
  },
  decompress: async (buffer) => readable("zstd", () => uncompressZstd(buffer)),
};

function uncompressSnappy(buffer: Buffer): Buffer {
  if (!buffer.subarray(0, XERIAL_MARK.length).equals(XERIAL_MARK)) {
    return snappy.uncompressSync(buffer, { asBuffer: true }) as Buffer;
  }
  const blocks: Buffer[] = [];
  for (let at = XERIAL_HEADER_BYTES; at < buffer.length; ) {
    const length = buffer.readInt32BE(at);
    const block = buffer.subarray(at + 4, at + 4 + length);
    if (length <= 0 || block.length !== length) throw new Error(`a block of ${length} bytes is cut at ${at}`);
    blocks.push(snappy.uncompressSync(block, { asBuffer: true }) as Buffer);
    at += 4 + length;
  }
  return Buffer.concat(blocks);
}

/** Node has zstd of its own from 22.15 on; before that a decoder in JavaScript does it, several times slower. */
function uncompressZstd(buffer: Buffer): Buffer {
  const native = (zlib as { zstdDecompressSync?: (bytes: Buffer) => Buffer }).zstdDecompressSync;
  if (native !== undefined) return native(buffer);
  const bytes = fzstd.decompress(buffer);
  return Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}

function readable(codec: string, decompress: () => Buffer): Buffer {
  try {
    return decompress();
  } catch (cause) {
    const reason = (cause as Error).message;
    throw new MoorlineError("MOORLINE_FORMAT_COMPRESSED_BATCH", { codec, reason }, { cause });
  }
}
