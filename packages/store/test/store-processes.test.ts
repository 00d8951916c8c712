import { type ChildProcess, spawn } from "node:child_process";
import { once } from "node:events";
import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { fileURLToPath } from "node:url";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { openStore } from "../src/index.js";
import { CLAIM, checkpoint } from "./store-parts.js";

const CHILD = fileURLToPath(new URL("store-child.ts", import.meta.url));

let folder: string;
let path: string;

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), "moorline-processes-"));
  path = join(folder, "moorline.db");
});
afterEach(() => rmSync(folder, { recursive: true, force: true }));

interface Child {
  readonly process: ChildProcess;
  /** Whole lines said so far. */
  said(): readonly string[];
  readonly ended: Promise<unknown>;
  complaint(): string;
}

function start(job: "claim" | "write"): Child {
  const child = spawn(process.execPath, ["--conditions=mono-src", "--import", "tsx", CHILD, job, path]);
  let out = "";
  let err = "";
  child.stdout.on("data", (chunk: Buffer) => {
    out += chunk.toString();
  });
  child.stderr.on("data", (chunk: Buffer) => {
    err += chunk.toString();
  });
  return {
    process: child,
    said: () => out.split("\n").slice(0, -1),
    ended: once(child, "close"),
    complaint: () => err,
  };
}

/** Deterministic moments to kill at, spread over the life of a transaction. */
function* momentsMs(seed: number): Generator<number> {
  let state = seed;
  for (;;) {
    state = (state * 1_103_515_245 + 12_345) % 2_147_483_648;
    yield 5 + (state % 90);
  }
}

describe("a store that several processes use", () => {
  it("keeps every acknowledged checkpoint and no part of another when its writer is killed with SIGKILL", async () => {
    const moments = momentsMs(7_460);
    let acknowledged = 0;
    for (let round = 1; round <= 6; round++) {
      const child = start("write");
      while (child.said().length === 0 && child.process.exitCode === null) await sleep(5);
      expect(child.complaint()).toBe("");
      await sleep(moments.next().value as number);
      child.process.kill("SIGKILL");
      await child.ended;
      acknowledged = Math.max(acknowledged, Number(child.said().at(-1)));

      const store = await openStore({ kind: "sqlite", path });
      const [partition] = await store.ingest.partitions("chill");
      const report = await store.audit();
      await store.close();
      expect(report.findings).toEqual([]);
      expect(partition!.nextOffset).toBeGreaterThanOrEqual(acknowledged);
      // One checkpoint may have been written whose acknowledgement died with the process.
      expect(partition!.nextOffset - acknowledged).toBeLessThanOrEqual(60);
      expect(partition!.events).toBe(partition!.nextOffset);
      acknowledged = partition!.nextOffset;
    }
    expect(acknowledged).toBeGreaterThan(6 * 60 - 1);
  }, 120_000);

  it("is migrated once by processes that open it at the same moment", async () => {
    const children = Array.from({ length: 4 }, () => start("claim"));
    await Promise.all(children.map((child) => child.ended));
    expect(children.map((child) => child.complaint())).toEqual(["", "", "", ""]);
    expect(children.map((child) => child.said()[0]).toSorted()).toEqual(["1", "2", "3", "4"]);
  }, 120_000);

  it("lets a writer wait for another process's checkpoints without holding up its own timers", async () => {
    const child = start("write");
    while (child.said().length === 0 && child.process.exitCode === null) await sleep(5);
    const store = await openStore({ kind: "sqlite", path });
    let ticks = 0;
    const timer = setInterval(() => ticks++, 5);
    const key = { partition: 1, epoch: 1 };
    await store.ingest.claimPartition({ ...CLAIM, ...key });
    for (let at = 0; at < 200; at += 10) {
      expect(await store.ingest.commitCheckpoint(checkpoint(at, 10, key))).toEqual({ outcome: "committed" });
    }
    clearInterval(timer);
    child.process.kill("SIGKILL");
    await child.ended;
    expect(child.complaint()).toBe("");
    expect(ticks).toBeGreaterThan(0);
    expect((await store.audit()).findings).toEqual([]);
    await store.close();
  }, 60_000);
});
