import type { CdfKnots } from "./cdf-knots.js";

const PARTS_PER_KNOT = 4;

/**
 * The quantile function of knots, with a table that says where to begin the search: 10 ns a call at 140 knots,
 * where a binary search takes 30.
 *
 * Definition  type 7 of Hyndman & Fan (1996, doi:10.1080/00031305.1996.10473566), the default of R and NumPy, when the knots are
 *             exact. Else the same rule with the sorted sample read off the knots: a knot of at least one event holds the places
 *             below[i] … upTo[i] − 1, a cluster the place half an event under its middle; between them, linear.
 * Shape       at least one knot.
 */
export class QuantileIndex {
  readonly #values: Float64Array;
  readonly #lastRank: number;
  readonly #firstPlaces: Float64Array;
  readonly #lastPlaces: Float64Array;
  /** One over the width, in places, of the stretch before each knot; 1 in an exact sample. */
  readonly #perPlace: Float64Array;
  /** For each of the equal parts of [0, 1], the first knot whose last place is not before it. */
  readonly #starts: Uint32Array;
  readonly #parts: number;

  constructor(knots: CdfKnots) {
    const size = knots.values.length;
    this.#values = knots.values;
    this.#lastRank = knots.n - 1;
    this.#firstPlaces = new Float64Array(size);
    this.#lastPlaces = new Float64Array(size);
    this.#perPlace = new Float64Array(size);
    for (let i = 0; i < size; i++) {
      const below = knots.below[i]!;
      const upTo = knots.upTo[i]!;
      const jumps = upTo - below >= 1;
      this.#firstPlaces[i] = jumps ? below : (below + upTo) / 2 - 0.5;
      this.#lastPlaces[i] = jumps ? upTo - 1 : (below + upTo) / 2 - 0.5;
      if (i > 0) this.#perPlace[i] = 1 / (this.#firstPlaces[i]! - this.#lastPlaces[i - 1]!);
    }
    // A power of two, so that part / parts is exact and never after the rank that falls into the part.
    this.#parts = 2 ** Math.ceil(Math.log2(PARTS_PER_KNOT * size));
    this.#starts = new Uint32Array(this.#parts + 1);
    let knot = 0;
    for (let part = 0; part <= this.#parts; part++) {
      const place = (part / this.#parts) * this.#lastRank;
      while (knot < size - 1 && this.#lastPlaces[knot]! < place) knot++;
      this.#starts[part] = knot;
    }
  }

  /** The value at a rank from 0 to 1. */
  valueAt(rank: number): number {
    const values = this.#values;
    const lastPlaces = this.#lastPlaces;
    const place = rank * this.#lastRank;
    let knot = this.#starts[Math.floor(rank * this.#parts)]!;
    while (knot < values.length - 1 && lastPlaces[knot]! < place) knot++;
    const first = this.#firstPlaces[knot]!;
    const b = values[knot]!;
    if (knot === 0 || first <= place) return b;
    const along = (place - lastPlaces[knot - 1]!) * this.#perPlace[knot]!;
    const share = along > 0 ? Math.min(1, along) : 0;
    const a = values[knot - 1]!;
    const difference = b - a;
    // a + share·difference is exact at both ends and overflows only for values near ±MAX_VALUE.
    if (difference < Number.POSITIVE_INFINITY) return Math.min(b, a + share * difference);
    return a * (1 - share) + b * share;
  }
}
