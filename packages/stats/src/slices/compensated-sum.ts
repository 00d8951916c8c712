/** A running sum that carries what rounding took off (Neumaier 1974): the parts of a split then sum to the whole. */
export class CompensatedSum {
  #sum = 0;
  #lost = 0;

  add(value: number): void {
    const next = this.#sum + value;
    this.#lost +=
      Math.abs(this.#sum) >= Math.abs(value) ? this.#sum - next + value : value - next + this.#sum;
    this.#sum = next;
  }

  get value(): number {
    return this.#sum + this.#lost;
  }
}
