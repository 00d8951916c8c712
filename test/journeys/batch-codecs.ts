import { readdir, readFile } from "node:fs/promises";
import { join } from "node:path";

/** A record batch of Kafka's log format, version 2: int64 base offset, int32 length of what follows, …, at byte 21 int16 attributes. */
const LENGTH_AT = 8;
const BEFORE_LENGTH_COUNTS = 12;
const MAGIC_AT = 16;
const ATTRIBUTES_AT = 21;
const CODEC_BITS = 0b111;
const CODEC_NAMES = ["none", "gzip", "snappy", "lz4", "zstd"] as const;

/** How many record batches of each codec a topic's log files hold, as the broker keeps them on its disk. */
export async function batchCodecs(dataDir: string, topic: string): Promise<Readonly<Record<string, number>>> {
  const batches: Record<string, number> = {};
  const folders = (await readdir(dataDir)).filter((name) => name.replace(/-\d+$/, "") === topic);
  for (const folder of folders) {
    const logs = (await readdir(join(dataDir, folder))).filter((name) => name.endsWith(".log"));
    for (const log of logs) {
      for (const codec of codecsOf(await readFile(join(dataDir, folder, log)))) {
        batches[codec] = (batches[codec] ?? 0) + 1;
      }
    }
  }
  return batches;
}

function* codecsOf(log: Buffer): Generator<string> {
  let at = 0;
  // What a log file is allocated beyond its last batch is zeros.
  while (at + ATTRIBUTES_AT + 2 <= log.length && log.readInt32BE(at + LENGTH_AT) > 0) {
    if (log[at + MAGIC_AT] !== 2) throw new Error(`not a record batch of version 2 at byte ${at}`);
    const code = log.readInt16BE(at + ATTRIBUTES_AT) & CODEC_BITS;
    yield CODEC_NAMES[code] ?? `codec ${code}`;
    at += BEFORE_LENGTH_COUNTS + log.readInt32BE(at + LENGTH_AT);
  }
}
