import { categoryHash } from "./category-name.js";

interface Kept {
  readonly name: string;
  readonly hash: number;
  count: number;
}

/**
 * At most `limit` categories with exact counts: those with the smallest hashes of all that ever came.
 *
 * A category that was let go has a hash above all that are kept, and their greatest hash only falls: it never comes back, so whatever is kept
 * was counted from its first event on.
 */
export class KeptCategories {
  readonly limit: number;
  readonly #byName = new Map<string, Kept>();
  #last: Kept | null = null;

  constructor(limit: number) {
    this.limit = limit;
  }

  get size(): number {
    return this.#byName.size;
  }

  get full(): boolean {
    return this.#byName.size >= this.limit;
  }

  /** The greatest hash that is kept; null when nothing is. */
  get greatestHash(): number | null {
    return this.#lastKept()?.hash ?? null;
  }

  get(name: string): number | undefined {
    return this.#byName.get(name)?.count;
  }

  /** Adds events to a category that is kept; false when it is not. */
  raise(name: string, count: number): boolean {
    const kept = this.#byName.get(name);
    if (kept === undefined) return false;
    kept.count += count;
    return true;
  }

  /** Takes in a category that is not kept. Returns the events that are let go for it: its own, or those of the last one. */
  admit(name: string, count: number): number {
    const entry: Kept = { name, hash: categoryHash(name), count };
    if (!this.full) {
      this.#put(entry);
      return 0;
    }
    const last = this.#lastKept();
    if (last === null || !isBefore(entry, last)) return count;
    this.#byName.delete(last.name);
    this.#last = null;
    this.#put(entry);
    return last.count;
  }

  *entries(): Generator<readonly [name: string, count: number]> {
    for (const { name, count } of this.#byName.values()) yield [name, count];
  }

  #put(entry: Kept): void {
    this.#byName.set(entry.name, entry);
    if (this.#last !== null && isBefore(this.#last, entry)) this.#last = entry;
  }

  /** Sought only after one was let go: of K categories about limit·ln(K/limit) are taken in late. */
  #lastKept(): Kept | null {
    if (this.#last !== null) return this.#last;
    for (const entry of this.#byName.values()) {
      if (this.#last === null || isBefore(this.#last, entry)) this.#last = entry;
    }
    return this.#last;
  }
}

function isBefore(a: Kept, b: Kept): boolean {
  return a.hash < b.hash || (a.hash === b.hash && a.name < b.name);
}
