// Compiles assembly/ to dist/kernel.wasm with the AssemblyScript compiler; does nothing when the output is newer than its sources.
import { spawnSync } from "node:child_process";
import { mkdirSync, readdirSync, renameSync, statSync } from "node:fs";
import { createRequire } from "node:module";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";

const root = join(dirname(fileURLToPath(import.meta.url)), "..");
const sources = join(root, "assembly");
const output = join(root, "dist", "kernel.wasm");

function modifiedMs(path) {
  return statSync(path, { throwIfNoEntry: false })?.mtimeMs ?? 0;
}

const inputs = [...readdirSync(sources).map((name) => join(sources, name)), fileURLToPath(import.meta.url)];
if (modifiedMs(output) > Math.max(...inputs.map(modifiedMs))) process.exit(0);

mkdirSync(dirname(output), { recursive: true });
// Written beside and renamed: two builds at a time never leave half a file.
const temporary = `${output}.${process.pid}`;
const compiler = join(
  dirname(createRequire(import.meta.url).resolve("assemblyscript/package.json")),
  "bin",
  "asc.js",
);
const flags = ["-O3", "--noAssert", "--runtime", "stub", "--initialMemory", "4", "--config", "none"];
const { status } = spawnSync(
  process.execPath,
  [compiler, join("assembly", "index.ts"), "--outFile", temporary, ...flags],
  { cwd: root, stdio: ["ignore", 2, 2] },
);
if (status !== 0) process.exit(status ?? 1);
renameSync(temporary, output);
