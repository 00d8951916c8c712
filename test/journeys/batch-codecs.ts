import { readdir, readFile } from "node:fs/promises";
import { join } from "node:path";

// A record batch of Kafka's log format, version 2: where its fields stand.
const LENGTH_AT = 8;
const BEFORE_LENGTH_COUNTS = 12;
const MAGIC_AT = 16;
const ATTRIBUTES_AT = 21;
const RECORDS_AT = 57;
const HEADER_BYTES = 61;
const CODEC_BITS = 0b111;
const CODEC_NAMES = ["none", "gzip", "snappy", "lz4", "zstd"] as const;

export interface CodecCount {
  readonly batches: number;
  readonly records: number;
}

/** How many record batches and records of each codec a topic's log files hold, as the broker keeps them on its disk. */
export async function batchCodecs(
  dataDir: string,
  topic: string,
): Promise<Readonly<Record<string, CodecCount>>> {
  const found: Record<string, CodecCount> = {};
  const folders = (await readdir(dataDir)).filter((name) => name.replace(/-\d+$/, "") === topic);
  for (const folder of folders) {
    const logs = (await readdir(join(dataDir, folder))).filter((name) => name.endsWith(".log"));
    for (const log of logs) {
      for (const { codec, records } of batchesOf(await readFile(join(dataDir, folder, log)))) {
        const sum = found[codec] ?? { batches: 0, records: 0 };
        found[codec] = { batches: sum.batches + 1, records: sum.records + records };
      }
    }
  }
  return found;
}

function* batchesOf(log: Buffer): Generator<{ readonly codec: string; readonly records: number }> {
  let at = 0;
  // What a log file is allocated beyond its last batch is zeros.
  while (at + HEADER_BYTES <= log.length && log.readInt32BE(at + LENGTH_AT) > 0) {
    if (log[at + MAGIC_AT] !== 2) throw new Error(`not a record batch of version 2 at byte ${at}`);
    const code = log.readInt16BE(at + ATTRIBUTES_AT) & CODEC_BITS;
    yield { codec: CODEC_NAMES[code] ?? `codec ${code}`, records: log.readInt32BE(at + RECORDS_AT) };
    at += BEFORE_LENGTH_COUNTS + log.readInt32BE(at + LENGTH_AT);
  }
}
