import { Writable } from "node:stream";
import { parseConfig } from "@moorline/config";
import { createTelemetry } from "@moorline/telemetry";
import { afterAll, describe, expect, it } from "vitest";
import type { CommandIo } from "../src/index.js";
import { connectStore } from "../src/run/connect-store.js";
import { healthListen } from "../src/run/start-services.js";
import { stopSignal } from "../src/run/stop-signal.js";
import { TestFolder } from "./capture-io.js";

const folder = new TestFolder();
afterAll(() => folder.remove());

const quiet = () => createTelemetry({ service: "test", logLevel: "silent" }).logger;

describe("connectStore", () => {
  it("opens a store that is there", async () => {
    const address = { kind: "sqlite", path: folder.at("s.db") } as const;
    const store = await connectStore(address, quiet(), new AbortController().signal);
    await store.ping();
    expect(store.kind).toBe("sqlite");
    await store.close();
  });

  it("tries again while a database is away, until it is told to stop", async () => {
    const lines: string[] = [];
    const logDestination = new Writable({
      write: (chunk: Buffer, _encoding, done) => {
        lines.push(chunk.toString());
        done();
      },
    });
    const { logger } = createTelemetry({ service: "test", logDestination });
    const stop = new AbortController();
    setTimeout(() => stop.abort(), 1_200);
    const startedMs = performance.now();
    const address = { kind: "postgres", url: "postgres://u:p@127.0.0.1:1/d" } as const;
    await expect(connectStore(address, logger, stop.signal)).rejects.toThrow(/the store does not answer/);
    expect(performance.now() - startedMs).toBeGreaterThan(1_000);
    expect(lines.length).toBeGreaterThanOrEqual(2);
    expect(lines[0]).toContain("the store does not answer");
  });

  it("does not try again where that is no use", async () => {
    const path = folder.write("torn.db", "this was never a database, whatever its name says".repeat(40));
    const startedMs = performance.now();
    await expect(
      connectStore({ kind: "sqlite", path }, quiet(), new AbortController().signal),
    ).rejects.toThrow(/store/);
    expect(performance.now() - startedMs).toBeLessThan(2_000);
  });
});

describe("healthListen", () => {
  const config = parseConfig(
    "streams: [ { name: s, source: { kafka: { brokers: ['a:1'], topics: [t], group: g } }, features: [ { name: x } ] } ]",
  );

  it("is the gateway's own business with a gateway, else the collector's port, else the evaluator's", () => {
    expect(healthListen({ config, parts: ["gateway", "collector"] })).toBeNull();
    expect(healthListen({ config, parts: ["evaluator", "collector"] })).toMatchObject({ port: 7_461 });
    expect(healthListen({ config, parts: ["evaluator"] })).toMatchObject({ port: 7_462 });
  });
});

describe("stopSignal", () => {
  const io = { err: () => undefined } as unknown as CommandIo;

  it("aborts at the first signal, and takes one that follows at once for the same key press", async () => {
    const stop = stopSignal(io);
    process.emit("SIGINT");
    process.emit("SIGINT");
    expect(stop.signal.aborted).toBe(true);
    stop.release();
  });

  it("listens no more once it is released", () => {
    const before = process.listenerCount("SIGINT");
    const stop = stopSignal(io);
    expect(process.listenerCount("SIGINT")).toBe(before + 1);
    stop.release();
    expect(process.listenerCount("SIGINT")).toBe(before);
  });
});
