import { describe, expect, it } from "vitest";
import { sliceText } from "../src/slice-text.js";

describe("sliceText()", () => {
  it.each([
    ["north", "north"],
    ["", ""],
    [12.5, "12.5"],
    [false, "false"],
    [null, "(none)"],
    [undefined, "(none)"],
    [["a"], "(structured)"],
  ])("sliceText(%j) is %j", (value, text) => {
    expect(sliceText(value)).toBe(text);
  });

  it("sliceText() cuts long values and still tells them apart", () => {
    const first = sliceText(`${"x".repeat(10_000)}a`);
    const second = sliceText(`${"x".repeat(10_000)}b`);

    expect(first).toHaveLength(209);
    expect(first).not.toBe(second);
    expect(first).toBe(sliceText(`${"x".repeat(10_000)}a`));
  });

  it("sliceText() cuts no character in two", () => {
    const text = sliceText(`${"x".repeat(199)}${"😀".repeat(10)}`);
    expect(text).toMatch(/^x{199}~[0-9a-f]{8}$/);
  });

  it("sliceText() gives text that every store keeps: no NUL, no half surrogate pair", () => {
    expect(sliceText("a\0b")).toBe("a\u2400b");
    expect(sliceText("a\ud800b")).toBe("a\ufffdb");
    expect(sliceText("😀")).toBe("😀");
  });
});
