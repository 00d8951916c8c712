import { sideOfPart } from "@moorline/baseline";
import type { NumericSide } from "@moorline/stats";
import type { Store } from "@moorline/store";

export interface HeldAgainst {
  readonly side: NumericSide;
  /** The slice of the baseline that it is: `all` where the baseline has no part for the slice. */
  readonly slice: string;
}

/** The active baseline of a stream, decoded once and kept until another one is active. */
export class BaselineSides {
  readonly #store: Store;
  readonly #stream: string;
  #id: string | null = null;
  #sides = new Map<string, NumericSide>();

  constructor(store: Store, stream: string) {
    this.#store = store;
    this.#stream = stream;
  }

  get id(): string | null {
    return this.#id;
  }

  /** Looks which baseline is active now; `rest` gives other work its turn while it is decoded. */
  async refresh(rest: () => Promise<void>): Promise<void> {
    const active = await this.#store.baselines.active(this.#stream);
    const id = active?.baselineId ?? null;
    if (id === this.#id) return;
    const parts = id === null ? [] : await this.#store.baselines.parts(id, { block: -1 });
    const sides = new Map<string, NumericSide>();
    for (const part of parts) {
      sides.set(sideKey(part.slice, part.feature), sideOfPart(part, id!));
      await rest();
    }
    this.#sides = sides;
    this.#id = id;
  }

  /** Null when the baseline has nothing of the feature. */
  of(slice: string, feature: string): HeldAgainst | null {
    const own = this.#sides.get(sideKey(slice, feature));
    if (own !== undefined) return { side: own, slice };
    const whole = this.#sides.get(sideKey("all", feature));
    return whole === undefined ? null : { side: whole, slice: "all" };
  }
}

function sideKey(slice: string, feature: string): string {
  return JSON.stringify([slice, feature]);
}
