import { BLOCK_COUNTS, HeldFeature, WHOLE } from "@moorline/baseline";
import type { Store } from "@moorline/store";

export interface HeldAgainst {
  readonly held: HeldFeature;
  /** The slice of the baseline that it is: `all` where the baseline has no part for the slice. */
  readonly slice: string;
}

/** The active baseline of a stream, decoded once and kept until another one is active. */
export class BaselineSides {
  readonly #store: Store;
  readonly #stream: string;
  #id: string | null = null;
  #sides = new Map<string, HeldFeature>();

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
    const partsOf = async (block: number) =>
      id === null ? [] : await this.#store.baselines.parts(id, { block });
    const blocks = new Map(
      (await partsOf(BLOCK_COUNTS)).map((part) => [sideKey(part.slice, part.feature), part]),
    );
    const sides = new Map<string, HeldFeature>();
    for (const whole of await partsOf(WHOLE)) {
      const key = sideKey(whole.slice, whole.feature);
      sides.set(key, new HeldFeature(whole, blocks.get(key) ?? null, id!));
      await rest();
    }
    this.#sides = sides;
    this.#id = id;
  }

  /** Null when the baseline has nothing of the feature. */
  of(slice: string, feature: string): HeldAgainst | null {
    const own = this.#sides.get(sideKey(slice, feature));
    if (own !== undefined) return { held: own, slice };
    const whole = this.#sides.get(sideKey("all", feature));
    return whole === undefined ? null : { held: whole, slice: "all" };
  }
}

function sideKey(slice: string, feature: string): string {
  return JSON.stringify([slice, feature]);
}
