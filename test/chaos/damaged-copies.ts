import { copyFile, readFile, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { DatabaseSync } from "@photostructure/sqlite";
import { runCli } from "../real-parts/index.js";

export interface Fault {
  readonly name: string;
  readonly sql: string;
}

/** Ways a store can go wrong that the audit must see; each is done to a copy of its own. */
export const FAULTS: readonly Fault[] = [
  { name: "a segment deleted", sql: "DELETE FROM segment WHERE id = (SELECT max(id) FROM segment)" },
  {
    name: "a checkpoint deleted",
    sql: "DELETE FROM segment_set WHERE id = (SELECT min(id) FROM segment_set)",
  },
  {
    name: "an offset moved on",
    sql: "UPDATE partition SET next_offset = next_offset + 1 WHERE partition = 0",
  },
  {
    name: "an offset moved back",
    sql: "UPDATE partition SET next_offset = next_offset - 1 WHERE partition = 1",
  },
];

export interface FaultFound {
  readonly name: string;
  readonly found: boolean;
  readonly exitCode: number | null;
  readonly firstFinding: string;
}

/** Damages a copy of the store for each fault and runs `moorline audit` on it: the checker must be able to fail. */
export async function auditOfDamagedCopies(
  run: { readonly folder: string; readonly storePath: string; readonly configPath: string },
  log: (line: string) => void,
): Promise<readonly FaultFound[]> {
  const found: FaultFound[] = [];
  const config = await readFile(run.configPath, "utf8");
  for (const [index, fault] of FAULTS.entries()) {
    const copy = join(run.folder, `damaged-${index}.db`);
    const copyConfig = join(run.folder, `damaged-${index}.yaml`);
    checkpointWal(run.storePath);
    await copyFile(run.storePath, copy);
    await writeFile(copyConfig, config.replace(run.storePath, copy));
    damage(copy, fault);
    const audit = await runCli(["audit", "--config", copyConfig, "--format", "json"], { cwd: run.folder });
    const report = JSON.parse(audit.out) as { clean: boolean; findings: readonly { sentence: string }[] };
    found.push({
      name: fault.name,
      found: audit.status !== 0 && !report.clean,
      exitCode: audit.status,
      firstFinding: report.findings[0]?.sentence ?? "",
    });
    log(
      `${fault.name}: audit exits with ${audit.status}: ${report.findings[0]?.sentence ?? "nothing found"}`,
    );
  }
  return found;
}

/** The copy is of the main file alone, so what is still in the write-ahead log must be in it. */
function checkpointWal(path: string): void {
  const db = new DatabaseSync(path);
  try {
    db.exec("PRAGMA wal_checkpoint(TRUNCATE)");
  } finally {
    db.close();
  }
}

function damage(path: string, fault: Fault): void {
  const db = new DatabaseSync(path);
  try {
    db.exec("PRAGMA foreign_keys = OFF");
    const { changes } = db.prepare(fault.sql).run();
    if (Number(changes) !== 1) throw new Error(`${fault.name}: ${changes} rows changed, 1 was meant`);
  } finally {
    db.close();
  }
}
