// Writes moorline.schema.json and the tables of README.md from the schema: node packages/config/scripts/write-reference.mjs (after a build).
import { readFileSync, writeFileSync } from "node:fs";
import { configJsonSchema, referenceTable } from "../dist/index.js";

const at = (name) => new URL(`../${name}`, import.meta.url);
const marker = "<!-- tables: written by scripts/write-reference.mjs -->";
const [head] = readFileSync(at("README.md"), "utf8").split(marker);
writeFileSync(at("README.md"), `${head}${marker}\n\n${referenceTable()}\n`);
writeFileSync(at("moorline.schema.json"), `${JSON.stringify(configJsonSchema(), null, 2)}\n`);
