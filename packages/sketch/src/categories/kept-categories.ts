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
  /** A binary heap: each entry stands before neither of its two below, so the first is the last by hash. */
  readonly #heap: Kept[] = [];

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
    return this.#heap[0]?.hash ?? null;
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
      this.#byName.set(name, entry);
      this.#raiseFrom(this.#heap.push(entry) - 1);
      return 0;
    }
    const last = this.#heap[0]!;
    if (!isBefore(entry, last)) return count;
    this.#byName.delete(last.name);
    this.#byName.set(name, entry);
    this.#heap[0] = entry;
    this.#sink();
    return last.count;
  }

  *entries(): Generator<readonly [name: string, count: number]> {
    for (const { name, count } of this.#byName.values()) yield [name, count];
  }

  #raiseFrom(start: number): void {
    let at = start;
    while (at > 0) {
      const above = (at - 1) >> 1;
      if (!isBefore(this.#heap[above]!, this.#heap[at]!)) return;
      this.#swap(above, at);
      at = above;
    }
  }

  #sink(): void {
    let at = 0;
    for (;;) {
      let next = 2 * at + 1;
      if (next >= this.#heap.length) return;
      if (next + 1 < this.#heap.length && isBefore(this.#heap[next]!, this.#heap[next + 1]!)) next++;
      if (!isBefore(this.#heap[at]!, this.#heap[next]!)) return;
      this.#swap(at, next);
      at = next;
    }
  }

  #swap(a: number, b: number): void {
    const entry = this.#heap[a]!;
    this.#heap[a] = this.#heap[b]!;
    this.#heap[b] = entry;
  }
}

function isBefore(a: Kept, b: Kept): boolean {
  return a.hash < b.hash || (a.hash === b.hash && a.name < b.name);
}
