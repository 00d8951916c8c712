// Fails when a package or service imports what the table in allowed-imports.mjs does not allow.
import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { findImportProblems } from "./find-import-problems.mjs";
import { sourceFiles } from "./source-files.mjs";

const root = fileURLToPath(new URL("../..", import.meta.url));
const files = sourceFiles(root).map((path) => ({ path, text: readFileSync(`${root}/${path}`, "utf8") }));
const problems = findImportProblems(files);
for (const problem of problems) console.error(problem);
console.log(`${files.length} files looked at, ${problems.length} imports against the rule`);
process.exitCode = problems.length > 0 ? 1 : 0;
