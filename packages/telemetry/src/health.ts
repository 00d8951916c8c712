export interface HealthProblem {
  readonly name: string;
  readonly reason: string;
}

/**
 * What must be well for a service to be ready. A part names itself once it exists (`set` with a reason while it starts), so that a
 * service whose parts never came up is not ready either.
 */
export class Health {
  readonly #problems = new Map<string, string | null>();

  /** `reason` null means well. */
  set(name: string, reason: string | null): void {
    this.#problems.set(name, reason);
  }

  /** Forgets a part that is gone for good, such as a partition that another collector has now. */
  clear(name: string): void {
    this.#problems.delete(name);
  }

  /** What is not well, in the order of first naming; empty means ready. */
  problems(): readonly HealthProblem[] {
    return [...this.#problems].flatMap(([name, reason]) => (reason === null ? [] : [{ name, reason }]));
  }
}
