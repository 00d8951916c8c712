import { describe, expect, it } from "vitest";
import type { FileColumn } from "../src/files/file-columns.js";
import { matchColumn } from "../src/files/match-column.js";

const columnsOf = (...paths: string[][]): FileColumn[] => paths.map((path) => ({ path, kind: "number" }));

describe("matchColumn", () => {
  const wanted = { name: "cargo_temp", path: ["cargo", "temp"] };

  it.each([
    ["the very path", columnsOf(["temp"], ["cargo_temp"], ["cargo", "temp"]), ["cargo", "temp"]],
    ["a column called by the name", columnsOf(["temp"], ["cargo.temp"], ["cargo_temp"]), ["cargo_temp"]],
    ["a column called by the path with dots", columnsOf(["temp"], ["cargo.temp"]), ["cargo.temp"]],
    ["a column called by the last part", columnsOf(["other"], ["temp"]), ["temp"]],
  ])("prefers %s", (_, columns, path) => {
    expect(matchColumn(columns, wanted)?.path).toEqual(path);
  });

  it("looks into a column whose structure is not told, and else finds nothing", () => {
    expect(matchColumn([{ path: ["cargo"], kind: "json" }], wanted)?.path).toEqual(["cargo", "temp"]);
    expect(matchColumn(columnsOf(["cargo"], ["x", "temp"]), wanted)).toBeNull();
  });
});
