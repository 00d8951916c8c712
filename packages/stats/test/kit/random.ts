/** A seeded generator (mulberry32) and what the tests draw from it. */
export class Random {
  #state: number;

  constructor(readonly seed: number) {
    this.#state = seed >>> 0;
  }

  /** Uniform in (0, 1). */
  uniform(): number {
    this.#state = (this.#state + 0x6d2b79f5) >>> 0;
    let t = this.#state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return (((t ^ (t >>> 14)) >>> 0) + 0.5) / 4294967296;
  }

  /** Standard normal, by Box and Muller. */
  normal(): number {
    return Math.sqrt(-2 * Math.log(this.uniform())) * Math.cos(2 * Math.PI * this.uniform());
  }

  sample(length: number, draw: (random: Random) => number = (r) => r.normal()): number[] {
    return Array.from({ length }, () => draw(this));
  }
}
