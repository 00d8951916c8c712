import { appendFile, mkdtemp, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { Writable } from "node:stream";
import { setTimeout as sleep } from "node:timers/promises";
import type { CollectorConfig, MoorlineConfig, SourceConfig, StreamConfig } from "@moorline/config";
import { type KindCounts, NumericSketch } from "@moorline/sketch";
import { decodeSegmentBody, openStore, type Store } from "@moorline/store";
import { createTelemetry, type RunningService, type Telemetry } from "@moorline/telemetry";
import { parcelStream } from "../../../test/fixtures/stream-config.js";
import { startCollector } from "../src/index.js";

/** What the tests of the collector share: a folder with a store, and files to read. */
export class CollectorBench {
  readonly #folder: string;
  readonly store: Store;
  readonly storePath: string;

  private constructor(folder: string, store: Store, storePath: string) {
    this.#folder = folder;
    this.store = store;
    this.storePath = storePath;
  }

  static async open(): Promise<CollectorBench> {
    const folder = await mkdtemp(join(tmpdir(), "moorline-collector-"));
    const storePath = join(folder, "moorline.db");
    const store = await openStore({ kind: "sqlite", path: storePath });
    await store.migrate();
    return new CollectorBench(folder, store, storePath);
  }

  path(name: string): string {
    return join(this.#folder, name);
  }

  async write(name: string, lines: readonly (string | Uint8Array)[]): Promise<string> {
    await writeFile(this.path(name), joinLines(lines));
    return this.path(name);
  }

  async append(name: string, lines: readonly (string | Uint8Array)[]): Promise<void> {
    await appendFile(this.path(name), joinLines(lines));
  }

  fileStream(
    paths: readonly string[],
    changes: Partial<StreamConfig> & { follow?: boolean } = {},
  ): StreamConfig {
    const { follow = false, ...rest } = changes;
    const source: SourceConfig = {
      kind: "file",
      paths,
      follow,
      deadLetterPath: this.path("dead-letters.ndjson"),
    };
    return parcelStream({ source, ...rest });
  }

  config(stream: StreamConfig, limits: Partial<CollectorConfig> = {}): MoorlineConfig {
    const listen = { host: "127.0.0.1", port: 0 };
    return {
      store: { kind: "sqlite", path: this.storePath },
      gateway: { ...listen, publicUrl: "http://127.0.0.1" },
      collector: {
        ...listen,
        checkpointMs: 200,
        checkpointEvents: 200_000,
        checkpointBytes: 2 ** 28,
        ...limits,
      },
      evaluator: { ...listen, tickMs: 1000 },
      streams: [stream],
    };
  }

  async start(
    config: MoorlineConfig,
    options: { instance?: string; nowMs?: () => number } = {},
  ): Promise<Running> {
    const log: string[] = [];
    const logDestination = new Writable({
      write(chunk, _encoding, done) {
        log.push(String(chunk));
        done();
      },
    });
    const telemetry = createTelemetry({ service: "collector", logLevel: "debug", logDestination });
    const service = await startCollector({ config, store: this.store, telemetry, ...options });
    return { service, telemetry, log };
  }

  /** Reads finished files to their end. */
  async readToEnd(config: MoorlineConfig, options: { nowMs?: () => number } = {}): Promise<Running> {
    const running = await this.start(config, options);
    await running.service.ended;
    await running.service.stop();
    return running;
  }

  async eventsCounted(stream = "chill-risk"): Promise<number> {
    return (await this.store.ingest.partitions(stream)).reduce((sum, row) => sum + row.events, 0);
  }

  /** Everything counted, merged over panes and partitions: by slice, then by feature. */
  async counted(stream = "chill-risk"): Promise<Map<string, Map<string, NumericSketch>>> {
    const sketches = new Map<string, Map<string, NumericSketch[]>>();
    for (const { paneStartMs } of await this.store.panes.pendingPanes(stream)) {
      for (const { slice, body } of await this.store.panes.segments(stream, paneStartMs)) {
        const bySlice = sketches.get(slice) ?? new Map<string, NumericSketch[]>();
        sketches.set(slice, bySlice);
        for (const [feature, bytes] of decodeSegmentBody(body)) {
          bySlice.set(feature, [...(bySlice.get(feature) ?? []), NumericSketch.decode(bytes)]);
        }
      }
    }
    return new Map(
      [...sketches].map(([slice, features]) => [
        slice,
        new Map([...features].map(([feature, parts]) => [feature, NumericSketch.merge(parts)])),
      ]),
    );
  }

  async kinds(slice: string, feature: string): Promise<KindCounts | undefined> {
    return (await this.counted()).get(slice)?.get(feature)?.counts;
  }

  async close(): Promise<void> {
    await this.store.close();
  }
}

export interface Running {
  readonly service: RunningService;
  readonly telemetry: Telemetry;
  readonly log: readonly string[];
}

/** Waits until something holds; fails with what it was waiting for. */
export async function until(
  what: string,
  holds: () => Promise<boolean> | boolean,
  withinMs = 10_000,
): Promise<void> {
  const deadlineMs = performance.now() + withinMs;
  while (!(await holds())) {
    if (performance.now() > deadlineMs) throw new Error(`after ${withinMs} ms still not: ${what}`);
    await sleep(20);
  }
}

/** An event of `parcelStream()` at a second of the test's hour. */
export function parcel(second: number, fields: Record<string, unknown> = {}): string {
  const at = new Date(Date.UTC(2026, 11, 1, 9, 0, 0) + second * 1000).toISOString();
  return JSON.stringify({
    measured_at: at,
    depot: second % 2 === 0 ? "north" : "south",
    cargo: { temp: (second % 17) / 2 },
    door_openings: second % 3,
    ...fields,
  });
}

export function parcels(from: number, to: number): string[] {
  return Array.from({ length: to - from }, (_, i) => parcel(from + i));
}

function joinLines(lines: readonly (string | Uint8Array)[]): Buffer {
  return Buffer.concat(lines.flatMap((line) => [Buffer.from(line), Buffer.from("\n")]));
}
