import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { describe, expect, it } from "vitest";
// @ts-expect-error a script without types of its own
import { findImportProblems } from "./find-import-problems.mjs";
// @ts-expect-error a script without types of its own
import { sourceFiles } from "./source-files.mjs";

const root = fileURLToPath(new URL("../..", import.meta.url));
const LONGEST_FILE_LINES = 450;
const DISCUSSED_FROM_LINES = 300;

const problemsOf = (path: string, text: string): string[] => findImportProblems([{ path, text }]) as string[];

describe("findImportProblems", () => {
  it.each([
    ["packages/stats/src/a.ts", 'import { openStore } from "@moorline/store";', "stats may not import store"],
    ["packages/store/src/a.ts", 'import { x } from "@moorline/collector";', "store may not import collector"],
    [
      "services/gateway/src/a.ts",
      'import { x } from "@moorline/evaluator";',
      "gateway may not import evaluator",
    ],
    [
      "services/cli/src/a.ts",
      'import { x } from "@moorline/store/src/schema.js";',
      "reaches past the package's index",
    ],
    ["packages/stats/src/a.ts", 'import { readFileSync } from "node:fs";', "stats is pure code"],
    ["packages/stats/src/a/b.ts", 'import { x } from "../../../sketch/src/index.js";', "leaves the package"],
    ["packages/decode/src/a.ts", 'const x = await import("@moorline/store");', "decode may not import store"],
  ])("sees that %s breaks the rule", (path, text, sentence) => {
    expect(problemsOf(path, text)).toEqual([expect.stringContaining(sentence)]);
  });

  it("lets through what the table allows", () => {
    expect(problemsOf("services/cli/src/a.ts", 'export { x } from "@moorline/gateway";')).toEqual([]);
    expect(problemsOf("packages/stats/test/a.test.ts", 'import { x } from "@moorline/sketch";')).toEqual([]);
    expect(problemsOf("packages/sketch/src/kernel/a.ts", 'import { readFileSync } from "node:fs";')).toEqual(
      [],
    );
  });
});

describe("source files", () => {
  const lengths = (sourceFiles(root) as string[])
    .filter((path) => path.includes("/src/"))
    .map((path) => ({ path, lines: readFileSync(`${root}/${path}`, "utf8").split("\n").length }));

  it(`are at most ${LONGEST_FILE_LINES} lines long`, () => {
    const long = lengths.filter(({ lines }) => lines > DISCUSSED_FROM_LINES);
    if (long.length > 0) console.info("past 300 lines:", long);
    expect(lengths.length).toBeGreaterThan(50);
    expect(long.filter(({ lines }) => lines > LONGEST_FILE_LINES)).toEqual([]);
  });
});
