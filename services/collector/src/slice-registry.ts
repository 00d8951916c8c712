/** The slice that takes the values of a key beyond its limit. */
export const OTHER_SLICE_VALUE = "other";

/**
 * Which values of the slice keys have a slice of their own. Shared by all partitions of a stream: the first `limit` values of a key,
 * those of earlier runs first; later ones are counted under `other`.
 */
export class SliceRegistry {
  readonly #names: string[];
  readonly #limit: number;
  readonly #known: Set<string>[];
  readonly #onOverflow: (key: string) => void;

  /** `onOverflow` is called once for a key, when its limit is passed. */
  constructor(
    keys: readonly string[],
    limit: number,
    seen: readonly string[],
    onOverflow: (key: string) => void,
  ) {
    this.#names = [...keys];
    this.#limit = limit;
    const full = new Set<string>();
    this.#onOverflow = (key) => {
      if (full.has(key)) return;
      full.add(key);
      onOverflow(key);
    };
    this.#known = this.#names.map((key) => {
      const values = seen.filter((slice) => slice.startsWith(`${key}=`)).map((s) => s.slice(key.length + 1));
      return new Set(values.filter((value) => value !== OTHER_SLICE_VALUE).slice(0, limit));
    });
  }

  /** The value that events with this one are counted under: itself, or `other`. */
  admit(keyIndex: number, value: string): string {
    const known = this.#known[keyIndex]!;
    if (value === OTHER_SLICE_VALUE || known.has(value)) return value;
    if (known.size < this.#limit) {
      known.add(value);
      return value;
    }
    this.#onOverflow(this.#names[keyIndex]!);
    return OTHER_SLICE_VALUE;
  }

  nameOf(keyIndex: number, value: string): string {
    return `${this.#names[keyIndex]!}=${value}`;
  }
}
