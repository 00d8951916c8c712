import { CompressionCodecs, CompressionTypes } from "kafkajs";
import { compressFrameSync } from "lz4-napi";
import snappy from "snappy";
import { describe, expect, it } from "vitest";
import { lz4Codec, registerCodecs, snappyCodec, zstdCodec } from "../../src/kafka/codecs.js";

const plain = Buffer.from('{"cargo":{"temp":4.5}}'.repeat(2000));

/** Blocks as Java's SnappyOutputStream frames them. */
function xerial(blocks: readonly Buffer[]): Buffer {
  const header = Buffer.from([0x82, 0x53, 0x4e, 0x41, 0x50, 0x50, 0x59, 0, 0, 0, 0, 1, 0, 0, 0, 1]);
  const framed = blocks.flatMap((block) => {
    const compressed = snappy.compressSync(block);
    const length = Buffer.alloc(4);
    length.writeInt32BE(compressed.length);
    return [length, compressed];
  });
  return Buffer.concat([header, ...framed]);
}

/** A zstd frame with one raw block and its content size, byte by byte as RFC 8878 has it. */
function rawZstdFrame(content: Buffer): Buffer {
  const blockHeader = Buffer.alloc(3);
  blockHeader.writeUIntLE((content.length << 3) | 1, 0, 3);
  return Buffer.concat([Buffer.from([0x28, 0xb5, 0x2f, 0xfd, 0x20, content.length]), blockHeader, content]);
}

describe("codecs", () => {
  it("registerCodecs() leaves no codec of Kafka unregistered", () => {
    registerCodecs();
    const codecs = CompressionCodecs as unknown as Record<number, () => { decompress: unknown }>;
    for (const type of [CompressionTypes.Snappy, CompressionTypes.LZ4, CompressionTypes.ZSTD]) {
      expect(typeof codecs[type]?.().decompress).toBe("function");
    }
  });

  it("snappyCodec.decompress() reads raw snappy", async () => {
    expect((await snappyCodec.decompress(snappy.compressSync(plain))).equals(plain)).toBe(true);
  });

  it("snappyCodec.decompress() reads the blocks that Java's producers frame", async () => {
    const framed = xerial([plain.subarray(0, 30_000), plain.subarray(30_000)]);
    expect((await snappyCodec.decompress(framed)).equals(plain)).toBe(true);
  });

  it("snappyCodec.decompress() refuses a framed batch that was cut", async () => {
    const framed = xerial([plain]);
    await expect(snappyCodec.decompress(framed.subarray(0, framed.length - 5))).rejects.toMatchObject({
      code: "MOORLINE_FORMAT_COMPRESSED_BATCH",
    });
  });

  it("lz4Codec.decompress() reads an lz4 frame", async () => {
    expect((await lz4Codec.decompress(compressFrameSync(plain))).equals(plain)).toBe(true);
  });

  it("zstdCodec.decompress() reads one frame and several", async () => {
    const content = Buffer.from("parcel 1 is cold");
    const frame = rawZstdFrame(content);

    expect((await zstdCodec.decompress(frame)).toString()).toBe("parcel 1 is cold");
    expect((await zstdCodec.decompress(Buffer.concat([frame, frame]))).toString()).toBe(
      "parcel 1 is coldparcel 1 is cold",
    );
  });

  it.each([
    ["snappy", snappyCodec],
    ["lz4", lz4Codec],
    ["zstd", zstdCodec],
  ] as const)("%s: bytes that are none of it are a FORMAT error", async (codec, { decompress }) => {
    await expect(decompress(Buffer.from("neither compressed nor framed"))).rejects.toMatchObject({
      code: "MOORLINE_FORMAT_COMPRESSED_BATCH",
      details: { codec },
    });
  });
});
