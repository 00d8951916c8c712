import { SeededRandom } from "./random.js";

/** Draws of one block: each hundredth of [0, 1) comes exactly once in a hundred draws. */
const STRATA = 100;

/**
 * Uniform draws by dimension and index that are spread evenly: Latin hypercube sampling (McKay, Beckman & Conover 1979,
 * doi:10.1080/00401706.1979.10489755) over blocks of a hundred. Dimensions are independent of each other. With a few hundred events a
 * window, draws that are independent of each other too would now and then stray beyond tolerance by chance alone; a demo that is watched
 * for minutes should show the drift that it is about.
 */
export class EvenDraws {
  readonly #seed: number;
  /** The last used order of strata by dimension: indices are asked for in ascending order. */
  readonly #orders = new Map<number, { readonly block: number; readonly order: readonly number[] }>();

  constructor(seed: number) {
    this.#seed = seed;
  }

  /** In (0, 1). */
  draw(dimension: number, index: number): number {
    const stratum = this.#orderOf(dimension, Math.floor(index / STRATA))[index % STRATA]!;
    const within = new SeededRandom(this.#seed + DIMENSION_STEP * dimension, index).uniform();
    return Math.min(1 - Number.EPSILON, Math.max(Number.EPSILON, (stratum + within) / STRATA));
  }

  #orderOf(dimension: number, block: number): readonly number[] {
    const known = this.#orders.get(dimension);
    if (known?.block === block) return known.order;
    const order = new SeededRandom(this.#seed - DIMENSION_STEP * (dimension + 1), block).permutation(STRATA);
    this.#orders.set(dimension, { block, order });
    return order;
  }
}

const DIMENSION_STEP = 7_919;
