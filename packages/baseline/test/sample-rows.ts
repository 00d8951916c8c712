import { mkdtempSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { DuckDBInstance } from "@duckdb/node-api";
import { parseConfig, type StreamConfig } from "@moorline/config";

export interface SampleRow {
  readonly atMs: number;
  readonly temp: number | null;
  readonly doors: number;
  readonly depot: string;
}

/** Numerical Recipes' 32-bit generator: the same numbers on every machine. */
export function randomOf(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
    return state / 2 ** 32;
  };
}

/** Rows six seconds apart: two depots with rows enough, one without; 1 % without a temperature; 70 % without a door opening. */
export function sampleRows(count: number, seed = 7): SampleRow[] {
  const random = randomOf(seed);
  return Array.from({ length: count }, (_, i) => ({
    atMs: Date.UTC(2026, 0, 1) + i * 6_000,
    temp: random() < 0.01 ? null : 2 + 3 * random() + 3 * random(),
    doors: random() < 0.7 ? 0 : 1 + Math.floor(4 * random()),
    depot: i % 500 === 0 ? "rare" : i % 2 === 0 ? "north" : "south",
  }));
}

export const folder = mkdtempSync(join(tmpdir(), "moorline-baseline-"));

export function writeFileOf(name: string, text: string): string {
  const path = join(folder, name);
  writeFileSync(path, text);
  return path;
}

export function writeNdjson(name: string, rows: readonly SampleRow[]): string {
  const lines = rows.map(({ atMs, temp, doors, depot }) =>
    JSON.stringify({ at: new Date(atMs).toISOString(), cargo: { temp }, doors, depot }),
  );
  return writeFileOf(name, `${lines.join("\n")}\n`);
}

export function writeSeparated(name: string, rows: readonly SampleRow[], separator: string): string {
  const lines = rows.map(({ atMs, temp, doors, depot }) =>
    [new Date(atMs).toISOString(), temp ?? "", doors, depot].join(separator),
  );
  return writeFileOf(
    name,
    `${["at", "cargo_temp", "doors", "depot"].join(separator)}\n${lines.join("\n")}\n`,
  );
}

/** Through DuckDB, in many row groups. */
export async function writeParquet(name: string, csv: string): Promise<string> {
  const path = join(folder, name);
  const instance = await DuckDBInstance.create(":memory:");
  const connection = await instance.connect();
  await connection.run(
    `copy (select * from read_csv('${csv}')) to '${path}' (format parquet, row_group_size 4096)`,
  );
  connection.closeSync();
  instance.closeSync();
  return path;
}

export function sampleStream(eventTime = "at"): StreamConfig {
  const config = parseConfig(`
streams:
  - name: chill-risk
    source: { kafka: { brokers: [localhost:1], topics: [t], group: g } }
    payload: { eventTime: ${eventTime} }
    slices: [depot]
    features:
      - { name: cargo_temp, path: cargo.temp, unit: °C }
      - { name: doors }
`);
  return config.streams[0]!;
}
