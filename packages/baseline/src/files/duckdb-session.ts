import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { type DuckDBConnection, DuckDBInstance } from "@duckdb/node-api";

/** Nothing is fetched by itself, memory is bounded (the rest goes to the session's folder), times without a zone are UTC. */
const SETTINGS = {
  autoinstall_known_extensions: "false",
  autoload_known_extensions: "false",
  memory_limit: "1GB",
};

/** One DuckDB database in a temporary folder that goes away with `close`. */
export class DuckdbSession {
  readonly connection: DuckDBConnection;
  readonly #instance: DuckDBInstance;
  readonly #folder: string;

  private constructor(instance: DuckDBInstance, connection: DuckDBConnection, folder: string) {
    this.#instance = instance;
    this.connection = connection;
    this.#folder = folder;
  }

  static async open(): Promise<DuckdbSession> {
    const folder = await mkdtemp(join(tmpdir(), "moorline-rows-"));
    const instance = await DuckDBInstance.create(join(folder, "rows.duckdb"), SETTINGS);
    const connection = await instance.connect();
    await connection.run("set TimeZone = 'UTC'");
    // The folder goes away at the end: nothing has to be made durable.
    await connection.run("pragma disable_checkpoint_on_shutdown");
    return new DuckdbSession(instance, connection, folder);
  }

  /** All rows of a small answer. */
  async rows(sql: string): Promise<unknown[][]> {
    const result = await this.connection.run(sql);
    return (await result.getRowsJS()) as unknown[][];
  }

  async close(): Promise<void> {
    this.connection.closeSync();
    this.#instance.closeSync();
    await rm(this.#folder, { recursive: true, force: true });
  }
}
