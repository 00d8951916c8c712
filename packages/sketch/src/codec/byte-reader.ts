import { MoorlineError } from "@moorline/errors";

/** Reads little-endian numbers and varints; whatever does not fit is a FORMAT error with its offset. */
export class ByteReader {
  readonly #bytes: Uint8Array;
  readonly #view: DataView;
  #at: number;

  constructor(bytes: Uint8Array, at: number) {
    this.#bytes = bytes;
    this.#view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
    this.#at = at;
  }

  get left(): number {
    return this.#bytes.length - this.#at;
  }

  fail(reason: string): never {
    throw new MoorlineError("MOORLINE_FORMAT_SKETCH", {
      reason,
      offset: this.#at,
      length: this.#bytes.length,
    });
  }

  float64(what: string): number {
    if (this.left < 8) this.fail(`${what} is cut off`);
    const value = this.#view.getFloat64(this.#at, true);
    if (!Number.isFinite(value) || Object.is(value, -0)) this.fail(`${what} is not a plain finite number`);
    this.#at += 8;
    return value;
  }

  /** A LEB128 integer of at most `most`. */
  varint(what: string, most: number = Number.MAX_SAFE_INTEGER): number {
    let value = 0;
    let scale = 1;
    for (let byte = 0x80; byte >= 0x80; scale *= 0x80) {
      if (this.left < 1) this.fail(`${what} is cut off`);
      byte = this.#bytes[this.#at]!;
      value += (byte & 0x7f) * scale;
      if (!(value <= most)) this.fail(`${what} is greater than ${most}`);
      if (byte === 0 && scale > 1) this.fail(`${what} is not in its shortest form`);
      this.#at++;
    }
    return value;
  }

  raw(what: string, count: number): Uint8Array {
    if (this.left < count) this.fail(`${what} is cut off`);
    this.#at += count;
    return this.#bytes.subarray(this.#at - count, this.#at);
  }
}
