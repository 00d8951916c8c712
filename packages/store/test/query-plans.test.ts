import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { CompiledQuery, type Kysely, type RootOperationNode } from "kysely";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { auditStore } from "../src/audit/audit-store.js";
import type { Engine } from "../src/engine/engine.js";
import { sqliteEngine } from "../src/engine/sqlite-engine.js";
import { evaluationStore } from "../src/evaluation-store.js";
import { openStore } from "../src/index.js";
import { migrate } from "../src/migrations/migrate.js";
import { paneStore } from "../src/pane-store.js";
import type { Tables } from "../src/schema.js";
import { CLAIM, checkpoint, rollUpPane } from "./store-parts.js";

/** What grows with time: a read of these must be led by an index, or it gets slower each day. */
const GROWING = ["rollup", "segment", "segment_set", "segment_pending", "evaluation", "logbook"];

let folder: string;
let engine: Engine;
let queries: RootOperationNode[];

beforeEach(async () => {
  folder = mkdtempSync(join(tmpdir(), "moorline-plans-"));
  const path = join(folder, "moorline.db");
  const store = await openStore({ kind: "sqlite", path });
  await store.ingest.claimPartition(CLAIM);
  await store.ingest.commitCheckpoint(checkpoint(0, 10));
  await rollUpPane(store, (await store.evaluations.acquireLease("e", "a", 0, 1_000))!);
  await store.close();
  engine = await sqliteEngine(path);
  await migrate(engine);
  queries = [];
});

afterEach(async () => {
  await engine.close();
  rmSync(folder, { recursive: true, force: true });
});

/** The engine's database, which notes what is asked of it. */
function noted(): Kysely<Tables> {
  return engine.db.withPlugin({
    transformQuery: ({ node }) => {
      queries.push(node);
      return node;
    },
    transformResult: async ({ result }) => result,
  });
}

/** One line for every table that a noted query reads: how SQLite reads it. */
async function plans(): Promise<string[]> {
  const lines: string[] = [];
  for (const node of queries) {
    if (node.kind !== "SelectQueryNode" && node.kind !== "RawNode") continue;
    const { sql, parameters } = engine.db.getExecutor().compileQuery(node, { queryId: "plan" });
    const explained = CompiledQuery.raw(`EXPLAIN QUERY PLAN ${sql}`, [...parameters]);
    const { rows } = await engine.db.executeQuery<{ detail: string }>(explained);
    lines.push(...rows.map((row) => row.detail));
  }
  return lines;
}

/** Reads of a growing table without an index that is searched. */
function scans(lines: readonly string[]): string[] {
  return lines.filter((line) => GROWING.some((table) => new RegExp(`^SCAN ${table}\\b`).test(line)));
}

describe("query plans on SQLite", () => {
  it("a read of rollups is led to its time, whatever else it names", async () => {
    const panes = paneStore({ ...engine, db: noted() });
    const query = { stream: "s", level: "pane", fromMs: 0, toMs: 9 } as const;
    await panes.rollups(query);
    await panes.rollups({ ...query, slice: "all" });
    await panes.rollups({ ...query, feature: "temp" });
    await panes.rollups({ ...query, slice: "all", feature: "temp" });
    const lines = await plans();
    expect(lines).toHaveLength(4);
    for (const line of lines) expect(line).toContain("start_ms>? AND start_ms<?");
  });

  it("a read of evaluations is led to its window ends, whatever else it names", async () => {
    const { evaluations } = evaluationStore({ ...engine, db: noted() });
    const query = { stream: "s", fromMs: 0, toMs: 9 };
    for (const more of [
      {},
      { horizon: "5m" },
      { horizon: "5m", slice: "all" },
      { slice: "all", feature: "temp" },
      { horizon: "5m", slice: "all", feature: "temp" },
    ]) {
      await evaluations({ ...query, ...more });
    }
    const lines = await plans();
    expect(lines).toHaveLength(5);
    for (const line of lines) expect(line).toContain("window_end_ms>? AND window_end_ms<?");
  });

  it("the reads of an evaluation round scan nothing", async () => {
    const panes = paneStore({ ...engine, db: noted() });
    await panes.pendingPanes("chill");
    await panes.segmentSlices("chill", 0);
    await panes.segments("chill", 0, "all");
    await panes.slices("chill");
    await panes.extent("chill");
    expect(queries).toHaveLength(6);
    const lines = await plans();
    expect(scans(lines)).toEqual([]);
    expect(
      lines.filter((line) => line.includes(" rollup ")).every((line) => line.includes("rollup_by_time")),
    ).toBe(true);
  });

  it("an audit reads the rollups and segments of a pane through the pane", async () => {
    const report = await auditStore(noted(), "chill");
    expect(report.findings).toEqual([]);
    const lines = await plans();
    expect(scans(lines)).toEqual([]);
    const ofPane = lines.filter((line) => line.includes("start_ms=?"));
    expect(ofPane.filter((line) => line.includes(" rollup "))).toHaveLength(4);
    const bySlice = lines.filter(
      (line) => line.includes("sqlite_autoindex_rollup_1") && !line.includes("feature=?"),
    );
    expect(bySlice).toEqual([]);
    const [ofHour, ...ofItsPanes] = lines.filter((line) => /^SEARCH (long|pane) /.test(line));
    expect(ofHour).toContain("stream=? AND level=? AND start_ms=?");
    expect(ofItsPanes.length).toBeGreaterThan(0);
    for (const line of ofItsPanes)
      expect(line).toContain("slice=? AND feature=? AND start_ms>? AND start_ms<?");
  });
});
