import { sql } from "kysely";
import { auditStore } from "./audit/audit-store.js";
import { baselineStore } from "./baseline-store.js";
import type { Engine } from "./engine/engine.js";
import { postgresEngine } from "./engine/postgres-engine.js";
import { sqliteEngine } from "./engine/sqlite-engine.js";
import { storeError, withStoreErrors } from "./engine/store-error.js";
import { evaluationStore } from "./evaluation-store.js";
import { ingestStore } from "./ingest-store.js";
import { logbookStore } from "./logbook-store.js";
import { migrate } from "./migrations/migrate.js";
import { paneStore } from "./pane-store.js";
import type { Store } from "./store.js";

export type StoreAddress =
  | { readonly kind: "sqlite"; readonly path: string }
  | { readonly kind: "postgres"; readonly url: string };

export interface StoreOptions {
  /** How long a writer waits for other processes' transactions before the store is said to be busy; SQLite only. Default: 10 s. */
  readonly busyPatienceMs?: number;
}

/**
 * Opens a store and brings its schema to this version's.
 *
 * @throws MOORLINE_UPSTREAM_STORE_AWAY when the file or server cannot be had
 * @throws MOORLINE_STATE_STORE_NEWER when a newer Moorline wrote it
 */
export async function openStore(address: StoreAddress, options: StoreOptions = {}): Promise<Store> {
  const engine = await openEngine(address, options);
  const store = storeOf(engine);
  try {
    await store.migrate();
  } catch (error) {
    await engine.close();
    throw error;
  }
  return store;
}

async function openEngine(address: StoreAddress, options: StoreOptions): Promise<Engine> {
  try {
    return address.kind === "sqlite"
      ? await sqliteEngine(address.path, options)
      : postgresEngine(address.url);
  } catch (error) {
    throw storeError(error);
  }
}

function storeOf(engine: Engine): Store {
  const base = withStoreErrors({
    migrate: () => migrate(engine),
    ping: async () => {
      await sql`SELECT 1`.execute(engine.db);
    },
    close: () => engine.close(),
    audit: (stream?: string) => auditStore(engine.db, stream),
  });
  return {
    kind: engine.kind,
    ...base,
    ingest: withStoreErrors(ingestStore(engine)),
    panes: withStoreErrors(paneStore(engine)),
    evaluations: withStoreErrors(evaluationStore(engine)),
    baselines: withStoreErrors(baselineStore(engine)),
    logbook: withStoreErrors(logbookStore(engine)),
  };
}
