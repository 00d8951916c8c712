import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { moorline } from "./capture-io.js";

const readme = readFileSync(new URL("../README.md", import.meta.url), "utf8");
const rows = readme.split("\n").filter((row) => row.startsWith("| `"));

describe("the README of the command", () => {
  it("has a row for each command that help lists", async () => {
    const { out } = await moorline(["--help"]);
    const commands = [...out.matchAll(/^ {2}([a-z]+) /gm)]
      .map((found) => found[1]!)
      .filter((name) => name !== "help");
    expect(commands.length).toBeGreaterThanOrEqual(7);
    for (const command of commands) {
      expect(rows.filter((row) => new RegExp(`\`${command}\\b`).test(row)).length).toBeGreaterThan(0);
    }
  });

  it.each(["compare", "pairs", "sensitivity", "rehearse", "audit", "run"])(
    "names every option of %s",
    async (command) => {
      const { out } = await moorline([command, "--help"]);
      const options = [...out.matchAll(/^ {2}(--[a-z-]+)/gm)].map((found) => found[1]!);
      expect(options.length).toBeGreaterThan(1);
      const named = rows.filter((row) => row.startsWith(`| \`${command} `)).join("\n");
      // Said once for all commands below the table.
      const common = new Set(["--config", "--help"]);
      expect(options.filter((option) => !common.has(option) && !named.includes(option))).toEqual([]);
    },
  );
});
