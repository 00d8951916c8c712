import type { SourceRecords } from "../source.js";
import type { Line } from "./split-lines.js";

/** Lines of a file as the records of a batch. */
export class LineRecords implements SourceRecords {
  readonly #lines: readonly Line[];

  constructor(lines: readonly Line[]) {
    this.#lines = lines;
  }

  get length(): number {
    return this.#lines.length;
  }

  offsetAt(index: number): number {
    return this.#lines[index]!.offset;
  }

  valueAt(index: number): Uint8Array | null {
    return this.#lines[index]!.value;
  }

  timestampMsAt(): null {
    return null;
  }
}
