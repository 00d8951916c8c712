import { describe, expect, it } from "vitest";
import { formatDuration, nearestName, parseDuration, parsePath } from "../src/index.js";

describe("parseDuration", () => {
  it.each([
    ["250ms", 250],
    ["90s", 90_000],
    ["5m", 300_000],
    ["1.5h", 5_400_000],
    ["30d", 2_592_000_000],
  ])("parseDuration(%s) is %d ms", (text, ms) => {
    expect(parseDuration(text)).toBe(ms);
  });

  it.each(["", "5", "5 m", "-5m", "m", "5M", "1e3s", "5m ", 5, null])(
    "parseDuration(%s) is no length of time",
    (text) => {
      expect(parseDuration(text)).toBeNull();
    },
  );
});

describe("formatDuration", () => {
  it.each([
    [300_000, "5m"],
    [5_400_000, "90m"],
    [86_400_000, "1d"],
    [1_500, "1500ms"],
    [0, "0ms"],
  ])("formatDuration(%d) is %s, and reads back", (ms, text) => {
    expect(formatDuration(ms)).toBe(text);
    expect(parseDuration(text)).toBe(ms);
  });
});

describe("parsePath", () => {
  it.each([
    ["cargo.temp", ["cargo", "temp"]],
    ["a", ["a"]],
    ['"a.b".c', ["a.b", "c"]],
    ['"say \\"hi\\"".x', ['say "hi"', "x"]],
    [
      ["a.b", "c"],
      ["a.b", "c"],
    ],
    ["door openings.n", ["door openings", "n"]],
  ])("parsePath(%s) gives its names", (path, names) => {
    expect(parsePath(path)).toEqual(names);
  });

  it.each(
    ["", ".", "a.", ".a", "a..b", '"a', '"a"b', [""], [], Array(17).fill("a").join(".")].map((p) => [p]),
  )("parsePath(%j) is no path", (path) => {
    expect(parsePath(path)).toBeNull();
  });
});

describe("nearestName", () => {
  it.each([
    ["latenes", "lateness"],
    ["hroizons", "horizons"],
    ["Features", "features"],
    ["xyz", null],
  ])("nearestName(%s) is %s", (name, near) => {
    expect(nearestName(name, ["lateness", "horizons", "features", "pane"])).toBe(near);
  });
});
