import net from "node:net";
import type { MoorlineError } from "@moorline/errors";
import { openStore, type Store } from "@moorline/store";
import pg from "pg";
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { CLAIM, checkpoint } from "../../packages/store/test/store-parts.js";
import { freePort, type RunningPostgres, startPostgres } from "../real-parts/index.js";

/** What follows when the connection to a real PostgreSQL is lost, at the moments that matter. */
let server: RunningPostgres;
let wire: Wire;
let store: Store;
let partition = 0;

beforeAll(async () => {
  server = await startPostgres();
});
afterAll(() => server.stop());
beforeEach(async () => {
  wire = await Wire.to(server.url);
  store = await openStore({ kind: "postgres", url: wire.url });
  partition += 1;
  await store.ingest.claimPartition({ ...CLAIM, partition });
});
afterEach(async () => {
  await store.close();
  await wire.close();
});

/** A TCP relay that cuts the connection on a word from the client, before or after the server hears it. */
class Wire {
  cut: { readonly on: string; readonly heard: boolean } | null = null;
  readonly #relay: net.Server;
  readonly #target: URL;
  readonly #sockets = new Set<net.Socket>();

  private constructor(target: URL) {
    this.#target = target;
    this.#relay = net.createServer((client) => this.#carry(client));
  }

  static async to(url: string): Promise<Wire> {
    const wire = new Wire(new URL(url));
    await new Promise<void>((resolve) => wire.#relay.listen(0, "127.0.0.1", resolve));
    return wire;
  }

  get url(): string {
    const url = new URL(this.#target);
    url.hostname = "127.0.0.1";
    url.port = String((this.#relay.address() as net.AddressInfo).port);
    return url.href;
  }

  close(): Promise<void> {
    for (const socket of this.#sockets) socket.destroy();
    return new Promise((resolve) => this.#relay.close(() => resolve()));
  }

  #carry(client: net.Socket): void {
    const upstream = net.connect(Number(this.#target.port), this.#target.hostname);
    for (const socket of [client, upstream]) {
      this.#sockets.add(socket);
      socket.on("error", () => {});
    }
    upstream.on("data", (bytes) => client.write(bytes));
    upstream.on("close", () => client.destroy());
    client.on("close", () => upstream.destroy());
    client.on("data", (bytes) => {
      const { cut } = this;
      if (cut === null || !bytes.includes(cut.on)) {
        upstream.write(bytes);
        return;
      }
      this.cut = null;
      // The server's answer is held back: it shows that the server is done, and the client never sees it.
      upstream.removeAllListeners("data");
      if (cut.heard) upstream.once("data", () => client.destroy()).write(bytes);
      else client.destroy();
    });
  }
}

async function failureOf(promise: Promise<unknown>): Promise<MoorlineError> {
  return promise.then(
    () => {
      throw new Error("it did not fail");
    },
    (error: unknown) => error as MoorlineError,
  );
}

async function nextOffset(): Promise<number> {
  const rows = await store.ingest.partitions("chill");
  return rows.find((row) => row.partition === partition)!.nextOffset;
}

describe("a PostgreSQL store that loses its connection", () => {
  it("during COMMIT, heard by the server: the outcome is unknown, and written again it is fenced where it had got to", async () => {
    wire.cut = { on: "commit", heard: true };
    const failure = await failureOf(store.ingest.commitCheckpoint(checkpoint(0, 10, { partition })));
    expect(failure).toMatchObject({
      code: "MOORLINE_UPSTREAM_STORE_AWAY",
      retryable: true,
      details: { outcomeUnknown: true },
    });
    expect(await store.ingest.commitCheckpoint(checkpoint(0, 10, { partition }))).toEqual({
      outcome: "fenced",
      epoch: 1,
      nextOffset: 10,
    });
    expect((await store.audit()).findings).toEqual([]);
  });

  it("during COMMIT, not heard by the server: the outcome is unknown, and written again it is committed", async () => {
    wire.cut = { on: "commit", heard: false };
    const failure = await failureOf(store.ingest.commitCheckpoint(checkpoint(0, 10, { partition })));
    expect(failure.details["outcomeUnknown"]).toBe(true);
    expect(await nextOffset()).toBe(0);
    const again = await store.ingest.commitCheckpoint(checkpoint(0, 10, { partition }));
    expect(again).toEqual({ outcome: "committed" });
  });

  it("before COMMIT: nothing was written, and that is certain", async () => {
    wire.cut = { on: "segment_pending", heard: true };
    const failure = await failureOf(store.ingest.commitCheckpoint(checkpoint(0, 10, { partition })));
    expect(failure).toMatchObject({
      code: "MOORLINE_UPSTREAM_STORE_AWAY",
      details: { outcomeUnknown: false },
    });
    expect(await nextOffset()).toBe(0);
    expect((await store.audit()).findings).toEqual([]);
  });

  it("in a claim, which is one statement: the outcome is unknown, and the next claim has an epoch of its own", async () => {
    wire.cut = { on: "insert into", heard: true };
    const failure = await failureOf(store.ingest.claimPartition({ ...CLAIM, partition }));
    expect(failure.details["outcomeUnknown"]).toBe(true);
    expect((await store.ingest.claimPartition({ ...CLAIM, partition })).epoch).toBe(3);
  });

  it("while it does nothing: the process lives and the next call has a new connection", async () => {
    const client = new pg.Client({ connectionString: server.url });
    await client.connect();
    await client.query(
      "SELECT pg_terminate_backend(pid) FROM pg_stat_activity WHERE application_name = 'moorline' AND pid <> pg_backend_pid()",
    );
    await client.end();
    await expect
      .poll(() =>
        store.ping().then(
          () => "answers",
          () => "away",
        ),
      )
      .toBe("answers");
  });
});

describe("openStore of PostgreSQL", () => {
  it("says that a server is away, retryable, and that a database is not there, not retryable", async () => {
    const away = await failureOf(
      openStore({ kind: "postgres", url: `postgres://moorline@127.0.0.1:${await freePort()}/x` }),
    );
    expect(away).toMatchObject({ code: "MOORLINE_UPSTREAM_STORE_AWAY", retryable: true });
    const url = new URL(server.url);
    url.pathname = "/not_there";
    expect(await failureOf(openStore({ kind: "postgres", url: url.href }))).toMatchObject({
      code: "MOORLINE_UPSTREAM_STORE_REFUSED",
      retryable: false,
    });
  });

  it("migrates an empty database once when several open it at the same moment", async () => {
    const client = new pg.Client({ connectionString: server.url });
    await client.connect();
    const name = `at_once_${process.pid}`;
    await client.query(`CREATE DATABASE ${name}`);
    await client.end();
    const url = new URL(server.url);
    url.pathname = `/${name}`;
    const stores = await Promise.all(
      Array.from({ length: 5 }, () => openStore({ kind: "postgres", url: url.href })),
    );
    const epochs = await Promise.all(
      stores.map(async (one) => (await one.ingest.claimPartition(CLAIM)).epoch),
    );
    expect(epochs.toSorted()).toEqual([1, 2, 3, 4, 5]);
    await Promise.all(stores.map((one) => one.close()));
  });
});
