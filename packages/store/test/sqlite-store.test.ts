import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { storeLaws } from "./store-laws.js";

storeLaws("SQLite", async () => {
  const folder = mkdtempSync(join(tmpdir(), "moorline-store-"));
  return {
    address: { kind: "sqlite", path: join(folder, "moorline.db") },
    drop: async () => rmSync(folder, { recursive: true, force: true }),
  };
});
