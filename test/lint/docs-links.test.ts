import { existsSync, readdirSync, readFileSync } from "node:fs";
import { dirname, join, relative } from "node:path";
import { fileURLToPath } from "node:url";
import { describe, expect, it } from "vitest";
// @ts-expect-error a script without types of its own
import { ALLOWED_IMPORTS } from "./allowed-imports.mjs";

const root = fileURLToPath(new URL("../..", import.meta.url));
const LEFT_OUT = new Set(["node_modules", "dist", ".git", ".moorline", "coverage"]);

function markdownFiles(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true }).flatMap((entry) => {
    if (entry.isDirectory()) return LEFT_OUT.has(entry.name) ? [] : markdownFiles(join(folder, entry.name));
    return entry.name.endsWith(".md") ? [join(folder, entry.name)] : [];
  });
}

/** Links of a page to files of the repository that are not there. */
function brokenLinks(file: string, text: string): string[] {
  const prose = text.replace(/```[\s\S]*?```/g, "");
  return [...prose.matchAll(/\]\(([^)\s#]+)(?:#[^)\s]*)?\)/g)]
    .map((match) => match[1]!)
    .filter((target) => !/^[a-z]+:/.test(target) && !existsSync(join(dirname(file), target)));
}

const files = markdownFiles(root);

describe("links in the documents", () => {
  it("are found when they lead nowhere", () => {
    expect(
      brokenLinks(join(root, "README.md"), "[a](LICENSE) [b](nothing/here.md#x) [c](https://example.org)"),
    ).toEqual(["nothing/here.md"]);
  });

  it.each(files.map((file) => relative(root, file)))("%s", (file) => {
    expect(brokenLinks(join(root, file), readFileSync(join(root, file), "utf8"))).toEqual([]);
  });
});

describe("DEVELOPERS.md", () => {
  const rows = readFileSync(join(root, "DEVELOPERS.md"), "utf8")
    .split("\n")
    .flatMap((line) => {
      const row = /^\| \d \| \[(?:packages|services)\/(\w+)\]\([^)]+\) \|.*\| ([^|]+) \|$/.exec(line);
      return row === null ? [] : [[row[1]!, row[2]!.trim()] as const];
    });

  it("has the layers that the import rule has, in its order", () => {
    const documented = Object.fromEntries(rows.map(([name, allowed]) => [name, allowedOf(allowed)]));
    expect(documented).toEqual(ALLOWED_IMPORTS);
  });

  it.each(rows.map(([name]) => name))("%s has a README", (name) => {
    expect(["packages", "services"].some((top) => existsSync(join(root, top, name, "README.md")))).toBe(true);
  });
});

function allowedOf(words: string): string[] {
  if (words === "nothing") return [];
  if (words === "packages") return ["*"];
  if (words === "all") return ["*", "collector", "evaluator", "gateway"];
  return words.split(", ");
}
