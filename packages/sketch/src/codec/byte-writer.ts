/** Writes little-endian numbers and varints into a growing array, which one writer uses again for text after text. */
export class ByteWriter {
  #bytes: Uint8Array<ArrayBuffer>;
  #view: DataView;
  #at = 0;

  constructor(capacity: number) {
    this.#bytes = new Uint8Array(capacity);
    this.#view = new DataView(this.#bytes.buffer);
  }

  /** Starts anew with room for so many bytes. */
  restart(capacity: number): void {
    this.#at = 0;
    this.#room(capacity);
  }

  byte(value: number): void {
    this.#room(1);
    this.#bytes[this.#at++] = value;
  }

  float64(value: number): void {
    this.#room(8);
    this.#view.setFloat64(this.#at, value, true);
    this.#at += 8;
  }

  /** LEB128 of a safe non-negative integer. */
  varint(value: number): void {
    let rest = value;
    while (rest >= 0x80) {
      this.byte((rest % 0x80) | 0x80);
      rest = Math.floor(rest / 0x80);
    }
    this.byte(rest);
  }

  raw(bytes: Uint8Array): void {
    this.#room(bytes.length);
    this.#bytes.set(bytes, this.#at);
    this.#at += bytes.length;
  }

  skip(count: number): void {
    this.#room(count);
    this.#at += count;
  }

  finish(): Uint8Array<ArrayBuffer> {
    return this.#bytes.slice(0, this.#at);
  }

  #room(count: number): void {
    if (this.#at + count <= this.#bytes.length) return;
    const grown = new Uint8Array(2 * (this.#at + count));
    grown.set(this.#bytes);
    this.#bytes = grown;
    this.#view = new DataView(grown.buffer);
  }
}
