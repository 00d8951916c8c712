// Writes the table part of README.md from the error table: node packages/errors/scripts/write-readme.mjs (after a build).
import { readFileSync, writeFileSync } from "node:fs";
import { ERROR_TABLE } from "../dist/index.js";

const path = new URL("../README.md", import.meta.url);
const marker = "<!-- table: written by scripts/write-readme.mjs -->";
const [head] = readFileSync(path, "utf8").split(marker);
const rows = Object.entries(ERROR_TABLE)
  .sort(([a], [b]) => a.localeCompare(b))
  .map(
    ([code, r]) =>
      `| \`${code}\` | ${r.category}${r.retryable ? ", retryable" : ""} | ${r.template} | ${r.hint} |`,
  );
writeFileSync(
  path,
  `${head}${marker}\n\n| code | category | what is wrong | what to do |\n|---|---|---|---|\n${rows.join("\n")}\n`,
);
