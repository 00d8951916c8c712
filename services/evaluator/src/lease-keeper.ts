import type { Lease, Store } from "@moorline/store";

/** A leader that dies is followed after this. */
export const LEASE_MS = 30_000;

/** Another process leads now: the round at hand is given up, the store would refuse it. */
export class LeaseLost extends Error {
  constructor(name: string) {
    super(`the lease "${name}" went to another process`);
    this.name = "LeaseLost";
  }
}

/** One lease of this process: taken, renewed in the middle of long rounds, given back. */
export class LeaseKeeper {
  readonly #store: Store;
  readonly #name: string;
  readonly #owner: string;
  readonly #nowMs: () => number;
  #lease: Lease | null = null;
  #renewedMs = 0;

  constructor(store: Store, name: string, owner: string, nowMs: () => number) {
    this.#store = store;
    this.#name = name;
    this.#owner = owner;
    this.#nowMs = nowMs;
  }

  get lease(): Lease | null {
    return this.#lease;
  }

  /** `taken` when this process did not hold it a moment ago: what it remembers may be another's past. */
  async acquire(): Promise<"taken" | "kept" | "another-leads"> {
    const before = this.#lease;
    this.#renewedMs = this.#nowMs();
    this.#lease = await this.#store.evaluations.acquireLease(
      this.#name,
      this.#owner,
      this.#renewedMs,
      LEASE_MS,
    );
    if (this.#lease === null) return "another-leads";
    return before?.token === this.#lease.token ? "kept" : "taken";
  }

  /**
   * Called often in a round: however many features there are, the lease outlives it.
   *
   * @throws LeaseLost when it did not
   */
  async renewIfDue(): Promise<void> {
    if (this.#nowMs() - this.#renewedMs <= LEASE_MS / 3) return;
    if ((await this.acquire()) === "kept") return;
    this.#lease = null;
    throw new LeaseLost(this.#name);
  }

  /** Takes the lease anew next time, so that everything is read again. */
  forget(): void {
    this.#lease = null;
  }

  async release(): Promise<void> {
    const lease = this.#lease;
    this.#lease = null;
    if (lease !== null) await this.#store.evaluations.releaseLease(lease);
  }
}
