import { type FileHandle, open } from "node:fs/promises";
import { DEFAULT_MAX_BYTES } from "@moorline/decode";
import { MoorlineError } from "@moorline/errors";
import { type Line, lineOf, splitLines } from "./split-lines.js";

const CHUNK_BYTES = 256 * 1024;
/** What is kept of a line: enough for the decoder to see that it is too large. */
const MOST_LINE_BYTES = DEFAULT_MAX_BYTES + 1;
const NEWLINE = 0x0a;

export interface LinesRead {
  readonly records: readonly Line[];
  /** Byte position after the last whole line; the position asked for when there is none yet. */
  readonly toOffset: number;
  readonly fileBytes: number;
}

/** Reads whole lines of one file from byte positions, with bounded memory however long a line is. */
export class LineReader {
  readonly #path: string;
  readonly #file: FileHandle;

  private constructor(path: string, file: FileHandle) {
    this.#path = path;
    this.#file = file;
  }

  static async open(path: string): Promise<LineReader> {
    try {
      return new LineReader(path, await open(path, "r"));
    } catch (cause) {
      throw unreadable(path, cause);
    }
  }

  async sizeBytes(): Promise<number> {
    return (await this.#try(() => this.#file.stat())).size;
  }

  async inode(): Promise<number> {
    return (await this.#try(() => this.#file.stat())).ino;
  }

  /** The first bytes, fewer when the file has fewer. */
  head(bytes: number): Promise<Buffer> {
    return this.#readAt(0, bytes);
  }

  /** Lines from a line's start on. At the end of a file that is `complete` a last line needs no line end. */
  async read(position: number, complete: boolean): Promise<LinesRead> {
    const fileBytes = await this.sizeBytes();
    const chunk = await this.#readAt(position, Math.min(CHUNK_BYTES, Math.max(0, fileBytes - position)));
    const { records, usedBytes } = splitLines(chunk, position);
    if (usedBytes > 0) return { records, toOffset: position + usedBytes, fileBytes };
    if (chunk.length < CHUNK_BYTES) {
      if (!complete || chunk.length === 0) return { records: [], toOffset: position, fileBytes };
      const value = lineOf(chunk, 0, chunk.length);
      return { records: [{ offset: position, value }], toOffset: fileBytes, fileBytes };
    }
    return this.#readLongLine(position, chunk, complete, fileBytes);
  }

  async close(): Promise<void> {
    await this.#file.close();
  }

  /** A line longer than a chunk: its beginning is kept, its end is looked for. */
  async #readLongLine(
    position: number,
    first: Buffer,
    complete: boolean,
    fileBytes: number,
  ): Promise<LinesRead> {
    const parts = [first];
    let kept = first.length;
    let at = position + first.length;
    for (;;) {
      const chunk = await this.#readAt(at, CHUNK_BYTES);
      const end = chunk.indexOf(NEWLINE);
      const bytes = end === -1 ? chunk.length : end;
      if (kept < MOST_LINE_BYTES) parts.push(chunk.subarray(0, bytes));
      kept += bytes;
      at += bytes;
      if (end === -1 && chunk.length === CHUNK_BYTES) continue;
      if (end === -1 && !complete) return { records: [], toOffset: position, fileBytes };

      const line = Buffer.concat(parts);
      const toOffset = end === -1 ? at : at + 1;
      const value = lineOf(line, 0, line.length);
      return { records: [{ offset: position, value }], toOffset, fileBytes };
    }
  }

  async #readAt(position: number, bytes: number): Promise<Buffer> {
    const buffer = Buffer.allocUnsafeSlow(bytes);
    let filled = 0;
    while (filled < bytes) {
      const at = position + filled;
      const { bytesRead } = await this.#try(() => this.#file.read(buffer, filled, bytes - filled, at));
      if (bytesRead === 0) break;
      filled += bytesRead;
    }
    return buffer.subarray(0, filled);
  }

  async #try<T>(action: () => Promise<T>): Promise<T> {
    try {
      return await action();
    } catch (cause) {
      throw unreadable(this.#path, cause);
    }
  }
}

function unreadable(path: string, cause: unknown): MoorlineError {
  const reason = (cause as Error).message;
  return new MoorlineError("MOORLINE_UPSTREAM_FILE_SOURCE", { path, reason }, { cause });
}
