import { accessSync, constants } from "node:fs";
import { delimiter, join } from "node:path";

/** Debian keeps PostgreSQL's server programs off the path. */
const MORE_FOLDERS = [
  "/usr/lib/postgresql/15/bin",
  "/usr/lib/postgresql/16/bin",
  "/usr/lib/postgresql/17/bin",
  "/usr/sbin",
];

/** The program's full path, or null when no folder has it. */
export function onPath(program: string): string | null {
  for (const folder of [...(process.env["PATH"] ?? "").split(delimiter), ...MORE_FOLDERS]) {
    const path = join(folder, program);
    try {
      accessSync(path, constants.X_OK);
      return path;
    } catch {
      // Not in this folder.
    }
  }
  return null;
}
