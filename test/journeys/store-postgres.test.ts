import pg from "pg";
import { afterAll, beforeAll } from "vitest";
import { storeLaws } from "../../packages/store/test/store-laws.js";
import { type RunningPostgres, startPostgres } from "../real-parts/index.js";

/** The laws of packages/store/test/store-laws.ts on a real PostgreSQL, each in a database of its own. */
let server: RunningPostgres;
let databases = 0;

beforeAll(async () => {
  server = await startPostgres();
});
afterAll(() => server.stop());

async function onServer(statement: string): Promise<void> {
  const client = new pg.Client({ connectionString: server.url });
  await client.connect();
  await client.query(statement);
  await client.end();
}

storeLaws("PostgreSQL", async () => {
  databases += 1;
  const name = `store_laws_${process.pid}_${databases}`;
  await onServer(`CREATE DATABASE ${name}`);
  const url = new URL(server.url);
  url.pathname = `/${name}`;
  return {
    address: { kind: "postgres", url: url.href },
    drop: () => onServer(`DROP DATABASE ${name} WITH (FORCE)`),
  };
});
