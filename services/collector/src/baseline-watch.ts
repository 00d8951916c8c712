import type { SketchOptions } from "@moorline/sketch";
import type { Store } from "@moorline/store";
import type { SketchOptionsSource } from "./sketch-options.js";

interface FrozenRow {
  readonly slice: string;
  readonly feature: string;
  readonly values: readonly number[];
}

const NO_OPTIONS: SketchOptions = {};

/**
 * The thresholds and atoms of a stream's active baseline, looked up again from time to time. A change takes effect in sketches
 * that are made from then on; a segment names the baseline that its threshold counts are of.
 */
export class BaselineWatch implements SketchOptionsSource {
  readonly #store: Store;
  readonly #stream: string;
  #baselineId: string | null = null;
  #options = new Map<string, SketchOptions>();

  constructor(store: Store, stream: string) {
    this.#store = store;
    this.#stream = stream;
  }

  get baselineId(): string | null {
    return this.#baselineId;
  }

  /** Looks which baseline is active now; true when it is another one than before. */
  async refresh(): Promise<boolean> {
    const active = await this.#store.baselines.active(this.#stream);
    const id = active?.baselineId ?? null;
    if (id === this.#baselineId) return false;

    const record = id === null ? null : await this.#store.baselines.get(id);
    this.#options = record === null ? new Map() : optionsOf(record.id, record.manifest);
    this.#baselineId = id;
    return true;
  }

  /** A slice that the baseline does not know is held against the whole. */
  optionsFor(slice: string, feature: string): SketchOptions {
    return this.#options.get(key(slice, feature)) ?? this.#options.get(key("all", feature)) ?? NO_OPTIONS;
  }
}

function optionsOf(id: string, manifest: unknown): Map<string, SketchOptions> {
  const options = new Map<string, SketchOptions>();
  for (const { slice, feature, values } of rowsOf(manifest, "thresholds")) {
    options.set(key(slice, feature), { thresholds: { id, values } });
  }
  for (const { slice, feature, values } of rowsOf(manifest, "atoms")) {
    const name = key(slice, feature);
    options.set(name, { ...options.get(name), knownAtoms: values });
  }
  return options;
}

/** The manifest comes from the store as JSON; rows that a later version writes differently are passed over. */
function rowsOf(manifest: unknown, name: string): FrozenRow[] {
  const rows = (manifest as Record<string, unknown> | null)?.[name];
  if (!Array.isArray(rows)) return [];
  return rows.filter(
    (row): row is FrozenRow =>
      typeof row?.slice === "string" && typeof row.feature === "string" && Array.isArray(row.values),
  );
}

function key(slice: string, feature: string): string {
  return JSON.stringify([slice, feature]);
}
