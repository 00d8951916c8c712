import { describe, expect, test } from "vitest";
import {
  countInWords,
  percentInWords,
  rankInWords,
  timesInWords,
  valueInWords,
} from "../src/figures-in-words.js";

describe("figures in words", () => {
  test.each([
    [0, "0 %"],
    [0.034, "3.4 %"],
    [0.1234, "12.3 %"],
    [1, "100.0 %"],
    [0.00012, "0.012 %"],
    [0.000001, "less than 0.001 %"],
  ])("percentInWords(%d) is %s", (share, text) => {
    expect(percentInWords(share)).toBe(text);
  });

  test.each([
    [5.2123, "5.212"],
    [0, "0"],
    [-12.5, "-12.5"],
    [1234.56, "1,234.6"],
    [123456.7, "123,457"],
    [1e12, "1.000e+12"],
    [0.00001234, "1.234e-5"],
    [-Number.MAX_VALUE, "-1.798e+308"],
  ])("valueInWords(%d) is %s", (value, text) => {
    expect(valueInWords(value)).toBe(text);
  });

  test.each([
    [3.42, "3.4 times"],
    [0.314, "0.31 times"],
    [0, "0 times"],
    [5200, "5,200 times"],
  ])("timesInWords(%d) is %s", (ratio, text) => {
    expect(timesInWords(ratio)).toBe(text);
  });

  test.each([
    [0.99, "p99"],
    [0.999, "p99.9"],
    [0.001, "p0.1"],
    [0.05, "p5"],
  ])("rankInWords(%d) is %s", (rank, text) => {
    expect(rankInWords(rank)).toBe(text);
  });

  test("countInWords groups thousands and rounds what a sketch interpolated", () => {
    expect([countInWords(12000), countInWords(999.6), countInWords(7)]).toEqual(["12,000", "1,000", "7"]);
  });
});
