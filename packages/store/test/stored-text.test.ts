import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { fromStoredText, toStoredText } from "../src/stored-text.js";

const anyText = fc.string({
  unit: fc.oneof(
    fc.integer({ min: 0, max: 0xffff }).map((unit) => String.fromCharCode(unit)),
    fc.constantFrom("\0", "\u2400", "0", "\ud800", "\udc00", "d", "8"),
  ),
});

describe("stored text", () => {
  it("fromStoredText gives back what toStoredText took", () => {
    fc.assert(
      fc.property(anyText, (text) => {
        expect(fromStoredText(toStoredText(text))).toBe(text);
      }),
      { seed: 7_460, numRuns: 2_000 },
    );
  });

  it("toStoredText gives what both engines keep: no NUL, no half of a surrogate pair", () => {
    fc.assert(
      fc.property(anyText, (text) => {
        expect(toStoredText(text)).not.toMatch(/[\0\p{Surrogate}]/u);
      }),
      { seed: 7_460, numRuns: 2_000 },
    );
  });

  it("toStoredText leaves ordinary names as they are", () => {
    for (const name of ["cargo_temp", "__proto__", "depot=Zürich", "\u{1f9ca}", "a\\b", "\n"]) {
      expect(toStoredText(name)).toBe(name);
    }
    expect(toStoredText("a\0b\u2400\ud800")).toBe("a\u24000b\u2400\u2400\u2400d800");
  });
});
