/** Stands for a path that leads through something that is no object, for example `cargo.temp` where `cargo` is 5. */
export const BLOCKED = Symbol("blocked path");

/** What readNumbers() answers when everything is a number, or a number or absent. */
export const NONE_ABSENT = -1;
export const SOME_ABSENT = -2;

type Json = Record<string, unknown>;

interface Parent {
  readonly parent: number;
  readonly key: string;
  readonly inherited: boolean;
}

/**
 * Reads configured paths from one parsed object after another. Objects on the way that paths share are looked up once an
 * event; a path of one segment is one lookup on the event itself.
 *
 * Only own properties count. A name that every object or array inherits (`constructor`, `__proto__`, `length`) is looked up with
 * `Object.hasOwn`; any other name cannot be inherited, so a plain lookup says the same and is cheaper.
 */
export class FieldReader {
  readonly #parents: Parent[] = [];
  readonly #objects: unknown[] = [undefined];
  readonly #parentOf: Int32Array;
  readonly #keys: string[];
  readonly #inherited: boolean[];

  constructor(paths: readonly (readonly string[])[]) {
    const known = new Map<string, number>();
    const parentIndex = (prefix: readonly string[]): number => {
      if (prefix.length === 0) return 0;
      const name = JSON.stringify(prefix);
      const found = known.get(name);
      if (found !== undefined) return found;

      const key = prefix[prefix.length - 1]!;
      this.#parents.push({ parent: parentIndex(prefix.slice(0, -1)), key, inherited: isInherited(key) });
      this.#objects.push(undefined);
      known.set(name, this.#parents.length);
      return this.#parents.length;
    };
    this.#parentOf = Int32Array.from(paths, (path) => parentIndex(path.slice(0, -1)));
    this.#keys = paths.map((path) => path[path.length - 1]!);
    this.#inherited = this.#keys.map(isInherited);
  }

  /** Takes the event that `read` answers from. */
  open(event: Json): void {
    const objects = this.#objects;
    objects[0] = event;
    for (let i = 0; i < this.#parents.length; i++) {
      const { parent, key, inherited } = this.#parents[i]!;
      objects[i + 1] = lookUp(objects[parent], key, inherited);
    }
  }

  /** The value of the path with this index: `undefined` where it is absent, BLOCKED where the way to it is barred. */
  read(index: number): unknown {
    return lookUp(this.#objects[this.#parentOf[index]!], this.#keys[index]!, this.#inherited[index]!);
  }

  /**
   * Reads the first paths as numbers into `values`, with 1 in `missing` where there is none. Returns the index of the first one that is
   * something else, else NONE_ABSENT or SOME_ABSENT. One loop over local variables: this is where a decoder spends its time after parsing.
   */
  readNumbers(values: Float64Array, missing: Uint8Array): number {
    const objects = this.#objects;
    const parentOf = this.#parentOf;
    const keys = this.#keys;
    const inherited = this.#inherited;
    let absent = NONE_ABSENT;
    for (let i = 0; i < values.length; i++) {
      const holder = objects[parentOf[i]!];
      const plain = typeof holder === "object" && holder !== null && !inherited[i]!;
      const value = plain ? (holder as Json)[keys[i]!] : lookUp(holder, keys[i]!, inherited[i]!);
      if (typeof value === "number") {
        values[i] = value;
        missing[i] = 0;
      } else if (value === undefined || value === null) {
        values[i] = 0;
        missing[i] = 1;
        absent = SOME_ABSENT;
      } else return i;
    }
    return absent;
  }
}

function lookUp(holder: unknown, key: string, inherited: boolean): unknown {
  if (typeof holder !== "object") return holder === undefined ? undefined : BLOCKED;
  if (holder === null || (inherited && !Object.hasOwn(holder, key))) return undefined;
  return (holder as Json)[key];
}

function isInherited(key: string): boolean {
  return key in Object.prototype || key in Array.prototype;
}
