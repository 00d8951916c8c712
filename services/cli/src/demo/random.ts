/** Numbers that a seed and an index give for ever, in whatever order they are asked for. */
export class SeededRandom {
  #state: number;

  constructor(seed: number, index: number) {
    // Two rounds of a 32-bit finaliser keep neighbouring indices apart (constants of MurmurHash3, Appleby).
    this.#state = finalise(finalise(seed ^ Math.imul(index, 0x9e3779b1)) + (index >>> 0));
  }

  /** Uniform in [0, 1): mulberry32 (Ettinger). */
  uniform(): number {
    this.#state = (this.#state + 0x6d2b79f5) | 0;
    let t = this.#state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  }

  /** The numbers 0 to count − 1 in a random order (Fisher & Yates 1938). */
  permutation(count: number): number[] {
    const order = Array.from({ length: count }, (_, i) => i);
    for (let i = count - 1; i > 0; i--) {
      const j = Math.floor(this.uniform() * (i + 1));
      [order[i], order[j]] = [order[j]!, order[i]!];
    }
    return order;
  }
}

function finalise(hash: number): number {
  let h = hash | 0;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return (h ^ (h >>> 16)) | 0;
}
