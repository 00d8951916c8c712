import { MoorlineError } from "@moorline/errors";
import { checkCount } from "../check-arguments.js";
import { decodeCategories } from "./category-decoder.js";
import { encodeCategories } from "./category-encoder.js";
import { DEFAULT_CATEGORY_LIMIT, MOST_CATEGORIES } from "./category-limits.js";
import { categoryName, HASH_RANGE } from "./category-name.js";
import { KeptCategories } from "./kept-categories.js";

export interface CategorySketchOptions {
  /** How many categories are kept beside the known ones, default 1,000. */
  readonly limit?: number;
  /** Categories that are always counted exactly: those of the baseline. */
  readonly known?: Iterable<string>;
}

/** What a sketch answers; every category in `counts` was counted exactly, the known ones also with 0. */
export interface CategorySketchCounts {
  /** Everything that came. */
  readonly events: number;
  readonly missing: number;
  readonly counts: ReadonlyMap<string, number>;
  /** Events of categories that are not kept. */
  readonly other: number;
}

/**
 * Counts of one categorical feature in bounded memory: known categories and the `limit` others with the smallest hashes (a bottom-k sample, Cohen &
 * Kaplan 2007, doi:10.1145/1281100.1281133), the rest as `other`.
 *
 * Invariants (checkInvariants names what is broken):
 *  1. missing + other + Σ counts = events, a safe integer.
 *  2. A kept category was counted from its first event on: its count is exact, in every merged sketch too.
 *  3. other > 0 ⇒ exactly `limit` categories are kept beside the known ones.
 *  4. No category is kept twice; names are in the form of `categoryName`.
 *
 * Which categories are kept depends on their set alone, not on order or frequency. So merging is associative and commutative to the last
 * event, and equals one sketch that saw everything.
 */
export class CategorySketch {
  readonly #known = new Map<string, number>();
  #kept: KeptCategories;
  #missing = 0;
  #other = 0;
  #events = 0;

  constructor({ limit = DEFAULT_CATEGORY_LIMIT, known = [] }: CategorySketchOptions = {}) {
    if (!Number.isInteger(limit) || limit < 1 || limit > MOST_CATEGORIES) throw refused(limit);
    for (const category of known) {
      this.#known.set(categoryName(category), 0);
      if (this.#known.size > MOST_CATEGORIES) throw refused(this.#known.size);
    }
    this.#kept = new KeptCategories(limit);
  }

  /** @throws MOORLINE_INPUT_SKETCH_COUNT when count is no whole number or the sum is no safe one */
  add(category: string, count = 1): void {
    checkCount(count, Number.MAX_SAFE_INTEGER - this.#events);
    if (count === 0) return;
    this.#events += count;
    // The raw name first: most are in the form in which they are kept.
    if (this.#raise(category, count)) return;
    const name = categoryName(category);
    if (name !== category && this.#raise(name, count)) return;
    this.#other += this.#kept.admit(name, count);
  }

  /** Events without a value. */
  addMissing(count = 1): void {
    checkCount(count, Number.MAX_SAFE_INTEGER - this.#events);
    this.#events += count;
    this.#missing += count;
  }

  get limit(): number {
    return this.#kept.limit;
  }

  /** The categories that are always counted, in the order of their names. */
  known(): readonly string[] {
    return [...this.#known.keys()].sort(byName);
  }

  counts(): CategorySketchCounts {
    const counts = new Map(this.#known);
    for (const [name, count] of this.#kept.entries()) counts.set(name, count);
    return { events: this.#events, missing: this.#missing, counts, other: this.#other };
  }

  /**
   * How many categories came, those within `other` too: exact while nothing is in `other`, else the estimate of a bottom-k sample, whose
   * relative standard error is 1/√(limit − 2) (Bar-Yossef et al. 2002, doi:10.1007/3-540-45726-7_1).
   */
  distinct(): number {
    let known = 0;
    for (const count of this.#known.values()) if (count > 0) known++;
    const { size, greatestHash } = this.#kept;
    if (this.#other === 0 || greatestHash === null) return known + size;
    return known + Math.max(size + 1, Math.round(((size - 1) * HASH_RANGE) / (greatestHash + 1)));
  }

  /**
   * All of these together. Known are the categories that every sketch with an event knows, the limit is the smallest among them: so
   * nothing that one of them could not have counted is called exact.
   */
  static merge(sketches: readonly CategorySketch[]): CategorySketch {
    const full = sketches.filter((sketch) => sketch.#events > 0);
    const used = full.length > 0 ? full : sketches;
    const [first, ...rest] = used;
    if (first === undefined) return new CategorySketch();
    const known = [...first.#known.keys()].filter((name) => rest.every((sketch) => sketch.#known.has(name)));
    const merged = new CategorySketch({ known, limit: Math.min(...used.map((sketch) => sketch.limit)) });
    for (const sketch of used) {
      for (const [name, count] of sketch.counts().counts) merged.add(name, count);
      merged.addMissing(sketch.#missing);
      merged.#addOther(sketch.#other);
    }
    return merged;
  }

  encode(): Uint8Array {
    const known = [...this.#known].sort(byEntryName);
    const kept = [...this.#kept.entries()].sort(byEntryName);
    return encodeCategories({ limit: this.limit, missing: this.#missing, other: this.#other, known, kept });
  }

  /** @throws MOORLINE_FORMAT_SKETCH or MOORLINE_FORMAT_SKETCH_VERSION when the bytes are not what encode() wrote */
  static decode(bytes: Uint8Array): CategorySketch {
    const { limit, missing, other, known, kept } = decodeCategories(bytes);
    const sketch = new CategorySketch({ limit, known: known.map(([name]) => name) });
    for (const [name, count] of [...known, ...kept]) sketch.add(name, count);
    sketch.addMissing(missing);
    sketch.#addOther(other);
    return sketch;
  }

  /** What is wrong with the sketch, one sentence each; empty when nothing is. For tests. */
  checkInvariants(): string[] {
    const problems: string[] = [];
    const { events, missing, counts, other } = this.counts();
    let sum = missing + other;
    for (const [name, count] of counts) {
      sum += count;
      if (!Number.isSafeInteger(count) || count < 0) problems.push(`1: ${JSON.stringify(name)} has ${count}`);
      if (categoryName(name) !== name) problems.push(`4: ${JSON.stringify(name)} is not the form of a name`);
      if (this.#known.has(name) && this.#kept.get(name) !== undefined) {
        problems.push(`4: ${JSON.stringify(name)} is kept twice`);
      }
    }
    if (sum !== events) problems.push(`1: ${sum} of ${events} events are counted`);
    if (this.#kept.size > this.limit) problems.push(`3: ${this.#kept.size} of ${this.limit} are kept`);
    if (other > 0 && !this.#kept.full) problems.push("3: events are in other while there is room");
    return problems;
  }

  #raise(name: string, count: number): boolean {
    const known = this.#known.get(name);
    if (known === undefined) return this.#kept.raise(name, count);
    this.#known.set(name, known + count);
    return true;
  }

  #addOther(count: number): void {
    checkCount(count, Number.MAX_SAFE_INTEGER - this.#events);
    this.#events += count;
    this.#other += count;
  }
}

function refused(count: number): MoorlineError {
  return new MoorlineError("MOORLINE_INPUT_SKETCH_CATEGORIES", { count, most: MOST_CATEGORIES });
}

/** By UTF-16 code units: the same on every machine. */
function byName(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}

function byEntryName(a: readonly [string, number], b: readonly [string, number]): number {
  return byName(a[0], b[0]);
}
