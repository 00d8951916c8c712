import { openStore, type Store, type StoreAddress } from "../../src/index.js";

/** A new empty store, and how to be rid of it. */
export interface FreshStore {
  readonly address: StoreAddress;
  drop(): Promise<void>;
}

/** The store under test, anew for each test, and other connections to it. */
export class LawBench {
  readonly #fresh: () => Promise<FreshStore>;
  readonly #others: Store[] = [];
  #place: FreshStore | null = null;
  #store: Store | null = null;

  constructor(fresh: () => Promise<FreshStore>) {
    this.#fresh = fresh;
  }

  get store(): Store {
    return this.#store!;
  }

  async open(): Promise<void> {
    this.#place = await this.#fresh();
    this.#store = await openStore(this.#place.address);
  }

  /** The same store as another process would open it. */
  async another(): Promise<Store> {
    const opened = await openStore(this.#place!.address);
    this.#others.push(opened);
    return opened;
  }

  async close(): Promise<void> {
    for (const opened of [this.store, ...this.#others.splice(0)]) await opened.close();
    await this.#place!.drop();
  }
}
