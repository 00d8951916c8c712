/** One line; its offset is the byte position of its start. */
export interface Line {
  readonly offset: number;
  readonly value: Buffer;
}

const NEWLINE = 0x0a;
const RETURN = 0x0d;

export interface SplitLines {
  /** One record a whole line, its offset the byte position of the line's start; the values are views of the chunk. */
  readonly records: Line[];
  /** Bytes that belong to whole lines. */
  readonly usedBytes: number;
}

/** Splits bytes that begin at a line's start. `\r\n` ends a line as `\n` does. A partial last line is left out. */
export function splitLines(chunk: Buffer, position: number): SplitLines {
  const records: Line[] = [];
  let start = 0;
  for (let end = chunk.indexOf(NEWLINE); end !== -1; end = chunk.indexOf(NEWLINE, start)) {
    records.push({ offset: position + start, value: lineOf(chunk, start, end) });
    start = end + 1;
  }
  return { records, usedBytes: start };
}

/** The bytes of one line without its end. */
export function lineOf(chunk: Buffer, start: number, end: number): Buffer {
  return chunk.subarray(start, end > start && chunk[end - 1] === RETURN ? end - 1 : end);
}
