/** A seeded generator of uniform and normal deviates for simulations of billions of values: xoshiro128++ (Blackman & Vigna 2018) and the ziggurat. */
export class FastRandom {
  #a: number;
  #b: number;
  #c: number;
  #d: number;

  constructor(seed: number) {
    // splitmix32 spreads a small seed over the state.
    let state = seed >>> 0;
    const next = () => {
      state = (state + 0x9e3779b9) | 0;
      let t = state ^ (state >>> 16);
      t = Math.imul(t, 0x21f0aaad);
      t ^= t >>> 15;
      t = Math.imul(t, 0x735a2d97);
      return (t ^ (t >>> 15)) | 0;
    };
    this.#a = next();
    this.#b = next();
    this.#c = next();
    this.#d = next();
  }

  /** In (0, 1). */
  uniform(): number {
    return ((this.#bits() >>> 0) + 0.5) / 4_294_967_296;
  }

  /** Standard normal, by the ziggurat; layer and place come from different bits. */
  normal(): number {
    for (;;) {
      const bits = this.#bits();
      const layer = bits & (LAYERS - 1);
      const place = bits >> 8;
      const limit = LIMIT[layer]!;
      if (place < limit && place > -limit) return place * WIDTH[layer]!;
      const x = this.#slow(layer, place);
      if (!Number.isNaN(x)) return x;
    }
  }

  /** Fills a column with standard normal values: the same ones as so many calls of `normal`, with the state in registers. */
  fillNormal(column: Float64Array): void {
    let [a, b, c, d] = [this.#a, this.#b, this.#c, this.#d];
    for (let at = 0; at < column.length; ) {
      const sum = (a + d) | 0;
      const bits = (((sum << 7) | (sum >>> 25)) + a) | 0;
      const t = b << 9;
      c ^= a;
      d ^= b;
      b ^= c;
      a ^= d;
      c ^= t;
      d = (d << 11) | (d >>> 21);
      const layer = bits & (LAYERS - 1);
      const place = bits >> 8;
      const limit = LIMIT[layer]!;
      if (place < limit && place > -limit) column[at++] = place * WIDTH[layer]!;
      else {
        [this.#a, this.#b, this.#c, this.#d] = [a, b, c, d];
        const x = this.#slow(layer, place);
        if (!Number.isNaN(x)) column[at++] = x;
        [a, b, c, d] = [this.#a, this.#b, this.#c, this.#d];
      }
    }
    [this.#a, this.#b, this.#c, this.#d] = [a, b, c, d];
  }

  /** The rare cases of the ziggurat: the tail, and a layer's edge; NaN where the draw is to be made again. */
  #slow(layer: number, place: number): number {
    if (layer === 0) return place < 0 ? -this.#beyond() : this.#beyond();
    const x = place * WIDTH[layer]!;
    const height = HEIGHT[layer]! + this.uniform() * (HEIGHT[layer - 1]! - HEIGHT[layer]!);
    return height < Math.exp(-0.5 * x * x) ? x : Number.NaN;
  }

  /** A normal deviate beyond the last layer (Marsaglia 1964). */
  #beyond(): number {
    for (;;) {
      const x = -Math.log(this.uniform()) / EDGE;
      const y = -Math.log(this.uniform());
      if (y + y > x * x) return EDGE + x;
    }
  }

  #bits(): number {
    const sum = (this.#a + this.#d) | 0;
    const result = (((sum << 7) | (sum >>> 25)) + this.#a) | 0;
    const t = this.#b << 9;
    this.#c ^= this.#a;
    this.#d ^= this.#b;
    this.#b ^= this.#c;
    this.#a ^= this.#d;
    this.#c ^= t;
    this.#d = (this.#d << 11) | (this.#d >>> 21);
    return result;
  }
}

/** The tables of Marsaglia & Tsang 2000 ("The ziggurat method for generating random variables") for 128 layers and 24-bit places. */
const LAYERS = 128;
const EDGE = 3.442619855899;
const AREA = 9.91256303526217e-3;
const PLACES = 2 ** 23;
const WIDTH = new Float64Array(LAYERS);
const LIMIT = new Int32Array(LAYERS);
const HEIGHT = new Float64Array(LAYERS);
{
  const density = (x: number) => Math.exp(-0.5 * x * x);
  let x = EDGE;
  const base = AREA / density(x);
  LIMIT[0] = (x / base) * PLACES;
  WIDTH[0] = base / PLACES;
  HEIGHT[0] = 1;
  WIDTH[LAYERS - 1] = x / PLACES;
  HEIGHT[LAYERS - 1] = density(x);
  LIMIT[1] = 0;
  for (let layer = LAYERS - 2; layer >= 1; layer -= 1) {
    const inner = Math.sqrt(-2 * Math.log(AREA / x + density(x)));
    LIMIT[layer + 1] = (inner / x) * PLACES;
    x = inner;
    WIDTH[layer] = x / PLACES;
    HEIGHT[layer] = density(x);
  }
}
