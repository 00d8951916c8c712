import { type FileHandle, open } from "node:fs/promises";
import { MoorlineError } from "@moorline/errors";
import type { DeadLetter, DeadLetterSink } from "../dead-letters.js";

/** Dead letters as lines of JSON, the payload in base64, synced to disk before `send` resolves. */
export class DeadLetterFile implements DeadLetterSink {
  readonly #path: string;
  #file: FileHandle | null = null;

  constructor(path: string) {
    this.#path = path;
  }

  async send(letters: readonly DeadLetter[]): Promise<void> {
    if (letters.length === 0) return;
    try {
      this.#file ??= await open(this.#path, "a");
      await this.#file.appendFile(letters.map(toLine).join(""));
      await this.#file.datasync();
    } catch (cause) {
      throw new MoorlineError(
        "MOORLINE_UPSTREAM_DEAD_LETTERS",
        { target: this.#path, reason: (cause as Error).message },
        { cause },
      );
    }
  }

  async close(): Promise<void> {
    await this.#file?.close();
    this.#file = null;
  }
}

function toLine(letter: DeadLetter): string {
  const { payload, ...facts } = letter;
  const payloadBase64 = payload === null ? null : Buffer.from(payload).toString("base64");
  return `${JSON.stringify({ ...facts, payloadBase64 })}\n`;
}
