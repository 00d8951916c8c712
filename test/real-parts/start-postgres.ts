import { spawnSync } from "node:child_process";
import { chownSync } from "node:fs";
import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import pg from "pg";
import { freePort } from "./free-port.js";
import { HostProcess } from "./host-process.js";
import { NotToBeHad } from "./not-to-be-had.js";
import { onPath } from "./on-path.js";
import { took } from "./took.js";

export interface RunningPostgres {
  readonly url: string;
  readonly via: string;
  stop(): Promise<void>;
}

/** A database of its own on a real PostgreSQL: the server in MOORLINE_TEST_POSTGRES, or a throw-away one of this machine. */
export async function startPostgres(): Promise<RunningPostgres> {
  const given = process.env["MOORLINE_TEST_POSTGRES"];
  if (given !== undefined) return databaseOn(given, `MOORLINE_TEST_POSTGRES`, async () => {});
  const [initdb, postgres] = [onPath("initdb"), onPath("postgres")];
  if (initdb === null || postgres === null) {
    throw new NotToBeHad("PostgreSQL", "install postgresql, or set MOORLINE_TEST_POSTGRES=postgres://…");
  }
  const home = await mkdtemp(join(tmpdir(), "moorline-postgres-"));
  const who = serverUser();
  if (who !== null) chownSync(home, who.uid, who.gid);
  const data = join(home, "data");
  const port = await freePort();
  const options = { cwd: home, ...(who ?? {}) };
  const made = spawnSync(
    initdb,
    ["-D", data, "-U", "moorline", "--auth=trust", "--no-sync", "-E", "UTF8"],
    options,
  );
  if (made.status !== 0) throw new Error(`initdb failed: ${made.stderr.toString()}`);
  const flags = [
    "-D",
    data,
    "-p",
    String(port),
    "-k",
    home,
    "-c",
    "listen_addresses=127.0.0.1",
    "-c",
    "fsync=off",
  ];
  const server = new HostProcess("PostgreSQL", postgres, flags, options);
  const url = `postgres://moorline@127.0.0.1:${port}/postgres`;
  await server.untilReady(() => answers(url));
  return databaseOn(url, "PostgreSQL of this machine", async () => {
    await server.end("SIGINT");
    await rm(home, { recursive: true, force: true });
  });
}

/** PostgreSQL refuses to run as root: Debian's postgres user runs it then. */
function serverUser(): { uid: number; gid: number } | null {
  if (process.getuid?.() !== 0) return null;
  const id = (flag: string) => Number(spawnSync("id", [flag, "postgres"]).stdout.toString());
  return { uid: id("-u"), gid: id("-g") };
}

async function answers(url: string): Promise<boolean> {
  const client = new pg.Client({ connectionString: url, connectionTimeoutMillis: 1_000 });
  try {
    await client.connect();
    return true;
  } finally {
    await client.end().catch(() => {});
  }
}

let databases = 0;

async function databaseOn(server: string, via: string, stop: () => Promise<void>): Promise<RunningPostgres> {
  databases += 1;
  const name = `moorline_test_${process.pid}_${databases}`;
  const client = new pg.Client({ connectionString: server });
  await client.connect();
  await client.query(`CREATE DATABASE ${name}`);
  await client.end();
  took("PostgreSQL", via);
  const url = new URL(server);
  url.pathname = `/${name}`;
  return { url: url.href, via, stop };
}
