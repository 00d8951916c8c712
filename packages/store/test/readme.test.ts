import { mkdtempSync, readFileSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { ERROR_TABLE } from "@moorline/errors";
import { DatabaseSync } from "@photostructure/sqlite";
import { describe, expect, it } from "vitest";
import { openStore } from "../src/index.js";

const README = readFileSync(new URL("../README.md", import.meta.url), "utf8");

describe("the README of the store", () => {
  it("lists the tables that a migrated store has, no more and no fewer", async () => {
    const folder = mkdtempSync(join(tmpdir(), "moorline-readme-"));
    const path = join(folder, "moorline.db");
    await (await openStore({ kind: "sqlite", path })).close();
    const database = new DatabaseSync(path);
    const rows = database
      .prepare("SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT LIKE 'sqlite_%'")
      .all() as { name: string }[];
    database.close();
    rmSync(folder, { recursive: true, force: true });

    const section = README.slice(README.indexOf("## Tables"), README.indexOf("## What holds"));
    const listed = [...section.matchAll(/^\| `(\w+)`/gm)].map(([, name]) => name!);
    expect(listed.toSorted()).toEqual(rows.map((row) => row.name).toSorted());
  });

  it("says of its errors what the error table says", () => {
    const section = README.slice(README.indexOf("## When it fails"), README.indexOf("## Tests"));
    const rows = [...section.matchAll(/`(MOORLINE_\w+)`\s*\| (yes|no)/g)];
    expect(rows).toHaveLength(6);
    for (const [, code, retryable] of rows) {
      const row = ERROR_TABLE[code as keyof typeof ERROR_TABLE] as { readonly retryable?: boolean };
      expect(row.retryable ?? false, code).toBe(retryable === "yes");
    }
  });
});
