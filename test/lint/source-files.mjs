import { readdirSync } from "node:fs";
import { join } from "node:path";

const LEFT_OUT = new Set(["node_modules", "dist", "golden"]);

/** TypeScript files of packages and services, as paths from the root. */
export function sourceFiles(root) {
  return ["packages", "services"].flatMap((top) => filesBelow(root, top));
}

function filesBelow(root, folder) {
  return readdirSync(join(root, folder), { withFileTypes: true }).flatMap((entry) => {
    const path = `${folder}/${entry.name}`;
    if (entry.isDirectory()) return LEFT_OUT.has(entry.name) ? [] : filesBelow(root, path);
    return /\.tsx?$/.test(entry.name) ? [path] : [];
  });
}
