import { existsSync } from "node:fs";
import { loadConfig, type MoorlineConfig } from "@moorline/config";
import { MoorlineError } from "@moorline/errors";
import type { Store } from "@moorline/store";
import type { CommandIo } from "./command-io.js";

export const DEFAULT_CONFIG = "moorline.yaml";

/** The config that a command works with: --config, else MOORLINE_CONFIG, else moorline.yaml here. */
export function configOf(io: CommandIo, path: string | undefined): MoorlineConfig {
  return loadConfig(path ?? io.env["MOORLINE_CONFIG"] ?? DEFAULT_CONFIG, io.env);
}

export interface StoreUse {
  /** May the store be made by this command? Else a SQLite file that is not there is an error, not an empty answer. */
  readonly create: boolean;
}

/** Opens the store with this version's schema, lends it, and closes it. */
export async function withStore<T>(
  config: MoorlineConfig,
  use: StoreUse,
  work: (store: Store) => Promise<T>,
): Promise<T> {
  const { store: place } = config;
  if (!use.create && place.kind === "sqlite" && !existsSync(place.path)) {
    throw new MoorlineError("MOORLINE_STATE_STORE_ABSENT", { path: place.path });
  }
  const { openStore } = await import("@moorline/store");
  const store = await openStore(place);
  try {
    return await work(store);
  } finally {
    await store.close();
  }
}
