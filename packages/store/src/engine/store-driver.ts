import { setTimeout as sleep } from "node:timers/promises";
import {
  AbortedTransactionError,
  CompiledQuery,
  type DatabaseConnection,
  type Driver,
  type QueryResult,
  type TransactionSettings,
} from "kysely";
import { fromStoredText, toStoredText } from "../stored-text.js";
import { CommitUnanswered } from "./commit-unanswered.js";
import type { EventLoopTurn } from "./event-loop-turn.js";

export interface StoreDriverOptions {
  /** How a transaction begins, where the driver's own way will not do. */
  readonly beginSql?: (settings: TransactionSettings) => string;
  /** Is it worth trying again soon, nothing having been done? */
  readonly isBusy: (error: unknown) => boolean;
  /** How long it is tried again. */
  readonly busyPatienceMs: number;
  /** For an engine that answers without leaving the thread. */
  readonly turn?: EventLoopTurn;
}

const BUSY_STEP_MS = 10;
const WRITES = new Set(["InsertQueryNode", "UpdateQueryNode", "DeleteQueryNode"]);

/**
 * A dialect's driver with what both engines need around it: text that either engine keeps (stored-text.ts), waiting for a lock
 * without holding up the process, and the word when a write's outcome is unknown.
 */
export class StoreDriver implements Driver {
  readonly #inner: Driver;
  readonly #options: StoreDriverOptions;

  constructor(inner: Driver, options: StoreDriverOptions) {
    this.#inner = inner;
    this.#options = options;
  }

  init(): Promise<void> {
    return this.#inner.init();
  }

  async acquireConnection(): Promise<DatabaseConnection> {
    return new StoreConnection(await this.#inner.acquireConnection(), this.#options);
  }

  async beginTransaction(connection: DatabaseConnection, settings: TransactionSettings): Promise<void> {
    const { inner } = own(connection);
    const { beginSql } = this.#options;
    if (beginSql === undefined) await this.#inner.beginTransaction(inner, settings);
    else await connection.executeQuery(CompiledQuery.raw(beginSql(settings)));
    own(connection).inTransaction = true;
  }

  async commitTransaction(connection: DatabaseConnection): Promise<void> {
    try {
      await this.#inner.commitTransaction(own(connection).inner);
    } catch (error) {
      throw error instanceof AbortedTransactionError ? error : new CommitUnanswered(error);
    }
    own(connection).inTransaction = false;
  }

  /** What made the transaction fail is what the caller must hear, not that a lost connection cannot be rolled back either. */
  async rollbackTransaction(connection: DatabaseConnection): Promise<void> {
    own(connection).inTransaction = false;
    try {
      await this.#inner.rollbackTransaction(own(connection).inner);
    } catch {
      // Both engines roll back what was not committed when the connection goes.
    }
  }

  releaseConnection(connection: DatabaseConnection): Promise<void> {
    return this.#inner.releaseConnection(own(connection).inner);
  }

  destroy(): Promise<void> {
    return this.#inner.destroy();
  }
}

class StoreConnection implements DatabaseConnection {
  inTransaction = false;

  constructor(
    readonly inner: DatabaseConnection,
    readonly options: StoreDriverOptions,
  ) {}

  async executeQuery<R>(query: CompiledQuery): Promise<QueryResult<R>> {
    await this.options.turn?.give();
    const stored = { ...query, parameters: query.parameters.map(toStored) };
    try {
      const result = await this.#patiently(() => this.inner.executeQuery<R>(stored));
      return { ...result, rows: result.rows.map(fromStored) };
    } catch (error) {
      const mayBeDone = !this.inTransaction && WRITES.has(query.query.kind);
      throw mayBeDone ? new CommitUnanswered(error) : error;
    }
  }

  /** Inside a transaction nothing waits: the lock was taken when it began. */
  async #patiently<T>(run: () => Promise<T>): Promise<T> {
    const until = performance.now() + this.options.busyPatienceMs;
    for (;;) {
      try {
        return await run();
      } catch (error) {
        if (this.inTransaction || !this.options.isBusy(error) || performance.now() > until) throw error;
        await sleep(BUSY_STEP_MS);
      }
    }
  }

  // biome-ignore lint/correctness/useYield: Kysely asks for the method; the store pages by key.
  async *streamQuery<R>(): AsyncIterableIterator<QueryResult<R>> {
    throw new Error("the store reads in pages, not in streams");
  }
}

function own(connection: DatabaseConnection): StoreConnection {
  return connection as StoreConnection;
}

function toStored(parameter: unknown): unknown {
  return typeof parameter === "string" ? toStoredText(parameter) : parameter;
}

/** Rows are keyed by the column names of the schema, never by data. Bytes come as plain Uint8Arrays from both engines. */
function fromStored<R>(row: R): R {
  const columns = row as Record<string, unknown>;
  const read: Record<string, unknown> = {};
  for (const column in columns) {
    const value = columns[column];
    if (typeof value === "string") read[column] = fromStoredText(value);
    else if (value instanceof Uint8Array) {
      read[column] = new Uint8Array(value.buffer, value.byteOffset, value.byteLength);
    } else read[column] = value;
  }
  return read as R;
}
