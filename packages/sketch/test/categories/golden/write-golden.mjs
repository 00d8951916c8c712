// Writes the golden files of the category format, version 1, with what must be read from them (golden.json).
// Run once for a new version of the format, after `tsc -b packages/sketch`; files of an old version are never written again.
//   node packages/sketch/test/categories/golden/write-golden.mjs
import { existsSync, writeFileSync } from "node:fs";
import { CategorySketch } from "../../../dist/index.js";

// A linear congruential sequence (Park & Miller 1988), so that the input needs no file.
function sequence(length, of) {
  let state = 20_191_130;
  return Array.from({ length }, () => {
    state = (state * 48_271) % 2_147_483_647;
    return of(state / 2_147_483_647);
  });
}

function sketchOf(values, options = {}) {
  const sketch = new CategorySketch(options);
  for (const value of values) sketch.add(value);
  return sketch;
}

const hostile = sketchOf(["__proto__", "constructor", "", "a\u0000b", "\u202e", "\ud800", "x".repeat(10_000), "é"]);
hostile.addMissing(300);
const many = () => sequence(600, (u) => `category-${Math.floor(200 * u * u)}`);
const known = ["category-0", "category-1", "never"];

const files = {
  "empty-v1": new CategorySketch({ known, limit: 5 }),
  "hostile-v1": hostile,
  "full-v1": sketchOf(many(), { limit: 20 }),
  "known-v1": sketchOf(many(), { limit: 20, known }),
  "merged-v1": CategorySketch.merge([
    sketchOf(many(), { limit: 20, known }),
    sketchOf(["never", "new", "category-1"], { limit: 30, known: ["never", "category-1"] }),
  ]),
};

const readings = {};
for (const [name, sketch] of Object.entries(files)) {
  const path = new URL(`${name}.categories`, import.meta.url);
  if (existsSync(path)) throw new Error(`${path.pathname} exists: golden files are kept for ever`);
  const bytes = sketch.encode();
  writeFileSync(path, bytes);
  const read = CategorySketch.decode(bytes);
  const { events, missing, counts, other } = read.counts();
  readings[name] = {
    bytes: bytes.length,
    events,
    missing,
    other,
    limit: read.limit,
    known: read.known(),
    distinct: read.distinct(),
    counts: [...counts].sort(([a], [b]) => (a < b ? -1 : 1)),
  };
}
writeFileSync(new URL("golden.json", import.meta.url), `${JSON.stringify(readings, null, 1)}\n`);
