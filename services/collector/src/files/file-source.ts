import { stat } from "node:fs/promises";
import { setTimeout as sleep, setImmediate as yieldToOthers } from "node:timers/promises";
import type { FileSourceConfig } from "@moorline/config";
import { isMoorlineError } from "@moorline/errors";
import type { CollectorReports } from "../collector-reports.js";
import type { BatchControl, Source, SourceSink, Verdict } from "../source.js";
import { fileIdentity, hasIdentity } from "./file-identity.js";
import { LineReader } from "./line-reader.js";
import { LineRecords } from "./line-records.js";

/** How often the end of a growing file is looked at. */
const POLL_MS = 200;
/** A file has no coordinator: after losing it to another collector, wait long enough for that one to get on. */
const REOPEN_AFTER_MS = 2_000;

/** Each file is one partition of its own topic: its path as the config has it. */
const PARTITION = 0;

const CONTROL: BatchControl = {
  heartbeat: () => yieldToOthers(),
  lowOffset: async () => 0,
};

interface OpenFile {
  readonly path: string;
  readonly topic: string;
  readonly reader: LineReader;
  readonly sink: SourceSink;
}

/** NDJSON files, read from the stored byte position on: growing ones for ever, finished ones to their end. */
export class FileSource implements Source {
  readonly #config: FileSourceConfig;
  readonly #reports: CollectorReports;
  readonly #readers: Promise<void>[] = [];
  readonly #settle: { resolve(): void; reject(error: unknown): void };
  #stopping = false;
  readonly ended: Promise<void>;

  constructor(config: FileSourceConfig, reports: CollectorReports) {
    this.#config = config;
    this.#reports = reports;
    let settle = { resolve: () => {}, reject: (_: unknown) => {} };
    this.ended = new Promise((resolve, reject) => {
      settle = { resolve, reject };
    });
    this.ended.catch(() => {});
    this.#settle = settle;
  }

  async start(sink: SourceSink): Promise<void> {
    let unfinished = this.#config.paths.length;
    for (const [index, path] of this.#config.paths.entries()) {
      const topic = this.#config.names?.[index] ?? path;
      const reading = this.#readFile(path, topic, sink).then(
        (outcome) => {
          if (outcome === "finished" && --unfinished === 0) this.#settle.resolve();
        },
        (error) => this.#settle.reject(error),
      );
      this.#readers.push(reading);
    }
  }

  async quiesce(): Promise<void> {
    this.#stopping = true;
    await Promise.all(this.#readers);
  }

  async close(): Promise<void> {}

  committed(): void {}

  async #readFile(path: string, topic: string, sink: SourceSink): Promise<"finished" | "halted" | "stopped"> {
    for (let attempt = 1; !this.#stopping; attempt++) {
      let reader: LineReader | null = null;
      try {
        reader = await LineReader.open(path);
        const outcome = await this.#readOpened({ path, topic, reader, sink }, () => {
          attempt = 1;
          this.#reports.back("source");
        });
        if (outcome !== "reopen") return outcome;
        await this.#pause(REOPEN_AFTER_MS * (0.5 + Math.random()));
      } catch (error) {
        if (!isMoorlineError(error) || error.code !== "MOORLINE_UPSTREAM_FILE_SOURCE") throw error;
        if (!this.#config.follow) throw error;
        const waitMs = Math.min(5_000, POLL_MS * 2 ** Math.min(attempt, 6));
        this.#reports.away("source", error, attempt, waitMs);
        await this.#pause(waitMs);
      } finally {
        await reader?.close();
      }
    }
    return "stopped";
  }

  async #readOpened(
    { path, topic, reader, sink }: OpenFile,
    onOpen: () => void,
  ): Promise<"finished" | "halted" | "stopped" | "reopen"> {
    const verdict = await sink.open({
      topic,
      partition: PARTITION,
      startOffset: 0,
      lowOffset: 0,
      endOffset: await reader.sizeBytes(),
      sourceId: await fileIdentity(reader),
      isSameSource: (storedId) => hasIdentity(reader, storedId),
    });
    onOpen();
    if (verdict.action !== "seek") return outcomeOf(verdict);

    let position = verdict.offset;
    while (!this.#stopping) {
      const lines = await reader.read(position, !this.#config.follow);
      const atEnd = lines.toOffset === position && lines.fileBytes >= position;
      if (atEnd) {
        if (!this.#config.follow) {
          await sink.finish(topic, PARTITION);
          return this.#stopping ? "stopped" : "finished";
        }
        sink.reportEnd(topic, PARTITION, lines.fileBytes);
        await this.#pause(POLL_MS);
        if (await wasReplaced(path, reader)) return "reopen";
        continue;
      }
      const records = new LineRecords(lines.records);
      const { toOffset, fileBytes: endOffset } = lines;
      const batch = { topic, partition: PARTITION, fromOffset: position, toOffset, endOffset, records };
      const next = await sink.take(batch, CONTROL);
      if (next.action === "read-on") position = lines.toOffset;
      else if (next.action === "seek") position = next.offset;
      else return outcomeOf(next);
    }
    return "stopped";
  }

  async #pause(ms: number): Promise<void> {
    for (let left = ms; left > 0 && !this.#stopping; left -= POLL_MS) await sleep(Math.min(left, POLL_MS));
  }
}

function outcomeOf(verdict: Verdict): "halted" | "reopen" {
  return verdict.action === "halt" ? "halted" : "reopen";
}

/** A file that was moved away and written anew is another file under the same path. */
async function wasReplaced(path: string, reader: LineReader): Promise<boolean> {
  const found = await stat(path).catch(() => null);
  return found !== null && found.ino !== (await reader.inode());
}
