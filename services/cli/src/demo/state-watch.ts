import type { FeatureStateRow, Store } from "@moorline/store";
import { eventTime } from "./demo-words.js";

const LOOK_EVERY_MS = 500;

export interface StateWatchOptions {
  readonly store: Store;
  readonly stream: string;
  readonly say: (text: string) => void;
  /** Called once, when the first feature is adrift. */
  readonly onFirstAdrift: () => void;
  readonly onFailure: (error: unknown) => void;
}

/** Says when a feature's state changes, in the words of the decision. Looks into the store as anyone could. */
export class StateWatch {
  readonly #options: StateWatchOptions;
  readonly #known = new Map<string, FeatureStateRow["state"]>();
  #timer: NodeJS.Timeout | null = null;
  #looking: Promise<void> = Promise.resolve();
  #adriftSeen = false;

  constructor(options: StateWatchOptions) {
    this.#options = options;
  }

  async start(): Promise<void> {
    for (const row of await this.#options.store.evaluations.states(this.#options.stream)) {
      this.#known.set(keyOf(row), row.state);
    }
    this.#timer = setInterval(() => {
      this.#looking = this.#looking.then(() => this.#look()).catch(this.#options.onFailure);
    }, LOOK_EVERY_MS);
  }

  async stop(): Promise<void> {
    if (this.#timer !== null) clearInterval(this.#timer);
    await this.#looking;
  }

  async #look(): Promise<void> {
    const { store, stream, say, onFirstAdrift } = this.#options;
    const rows = await store.evaluations.states(stream);
    const fresh = rows.filter((row) => !this.#known.has(keyOf(row)));
    const changed = rows.filter(
      (row) => this.#known.has(keyOf(row)) && this.#known.get(keyOf(row)) !== row.state,
    );
    for (const row of rows) this.#known.set(keyOf(row), row.state);
    if (fresh.length > 0) say(firstWindows(fresh));
    for (const row of [...fresh.filter(({ state }) => state === "adrift"), ...changed]) say(changeLine(row));
    if (!this.#adriftSeen && rows.some(({ state }) => state === "adrift")) {
      this.#adriftSeen = true;
      onFirstAdrift();
    }
  }
}

function firstWindows(rows: readonly FeatureStateRow[]): string {
  const counts = new Map<string, number>();
  for (const { state } of rows) counts.set(state, (counts.get(state) ?? 0) + 1);
  const states = [...counts].map(([state, count]) => `${count} ${state}`).join(", ");
  const horizons = [...new Set(rows.map(({ horizon }) => horizon))].join(", ");
  return `${eventTime(rows[0]!.windowEndMs)}  first windows of ${horizons} compared, by feature and slice: ${states}\n`;
}

function changeLine({ windowEndMs, feature, slice, horizon, state, sentence }: FeatureStateRow): string {
  return `${eventTime(windowEndMs)}  ${feature} (${slice}, ${horizon}) is ${state}: ${sentence}\n`;
}

function keyOf({ horizon, slice, feature }: FeatureStateRow): string {
  return JSON.stringify([horizon, slice, feature]);
}
