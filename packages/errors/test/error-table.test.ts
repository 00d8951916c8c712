import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { ERROR_TABLE, type ErrorCode, isMoorlineError, MoorlineError } from "../src/index.js";

const codes = Object.keys(ERROR_TABLE) as ErrorCode[];
const readme = readFileSync(new URL("../README.md", import.meta.url), "utf8");
const documented = [...readme.matchAll(/^\| `(MOORLINE_[A-Z0-9_]+)`/gm)].map((m) => m[1]);

describe("the error table", () => {
  it("stands in the README row for row, and the README names no other code", () => {
    expect(documented.toSorted()).toEqual(codes.toSorted());
    for (const code of codes) {
      expect(readme).toContain(ERROR_TABLE[code].template);
      expect(readme).toContain(ERROR_TABLE[code].hint);
    }
  });

  it.each(codes)("%s names its category, and its sentences end without a full stop", (code) => {
    const row = ERROR_TABLE[code];
    expect(code.startsWith(`MOORLINE_${row.category}_`)).toBe(true);
    expect(row.template).not.toMatch(/\.$/);
    expect(row.hint).not.toMatch(/\.$/);
    const error = new MoorlineError(code);
    expect([error.code, error.category]).toEqual([code, row.category]);
  });
});

describe("MoorlineError", () => {
  it("fills its sentences from the details, with control characters visible and long values cut", () => {
    const error = new MoorlineError("MOORLINE_INPUT_RANK_RANGE", { rank: `\u001b[31m${"x".repeat(500)}` });
    expect(error.message).toContain("\\x1b[31m");
    expect(error.message.length).toBeLessThan(300);
  });

  it("does not read a detail from the prototype", () => {
    expect(new MoorlineError("MOORLINE_INPUT_RANK_RANGE").message).toBe("rank ? is outside 0 to 1");
  });

  it("is told from other errors, and the cause is kept", () => {
    const cause = new Error("disk");
    expect(new MoorlineError("MOORLINE_STATE_EMPTY_SKETCH", {}, { cause }).cause).toBe(cause);
    expect(isMoorlineError(new MoorlineError("MOORLINE_STATE_EMPTY_SKETCH"))).toBe(true);
    for (const other of [null, undefined, 1, cause, {}]) expect(isMoorlineError(other)).toBe(false);
  });
});
