import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { PROPERTY, samples } from "./kit/samples.js";

describe("cdfOf(values)", () => {
  test.each([
    { name: "nothing", sample: [], values: [], below: [], upTo: [] },
    { name: "one value", sample: [4], values: [4], below: [0], upTo: [1] },
    { name: "two values, descending", sample: [2, 1], values: [1, 2], below: [0, 1], upTo: [1, 2] },
    { name: "all equal", sample: [7, 7, 7], values: [7], below: [0], upTo: [3] },
    { name: "ties among others", sample: [3, 1, 3, 2], values: [1, 2, 3], below: [0, 1, 2], upTo: [1, 2, 4] },
    { name: "−0 and 0 as one value", sample: [0, -0, 1], values: [0, 1], below: [0, 2], upTo: [2, 3] },
    {
      name: "the greatest doubles",
      sample: [Number.MAX_VALUE, -Number.MAX_VALUE],
      values: [-Number.MAX_VALUE, Number.MAX_VALUE],
      below: [0, 1],
      upTo: [1, 2],
    },
  ])("cdfOf makes knots of $name", ({ sample, values, below, upTo }) => {
    const view = cdfOf(sample);
    expect([...view.values]).toEqual(values);
    expect([...view.below]).toEqual(below);
    expect([...view.upTo]).toEqual(upTo);
    expect(view.n).toBe(sample.length);
    expect(view.exact).toBe(true);
    expect(view.rankErrorAt(0.5)).toBe(0);
  });

  test.each([Number.NaN, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY])(
    "cdfOf refuses %s and says where it stands",
    (value) => {
      expect(() => cdfOf([1, value])).toThrowError(
        expect.objectContaining({ code: "MOORLINE_INPUT_VALUE_NOT_FINITE", details: { index: 1, value } }),
      );
    },
  );

  test("cdfOf leaves its input as it was", () => {
    const input = Object.freeze([3, 1, 2]);
    cdfOf(input);
    expect(input).toEqual([3, 1, 2]);
  });

  test("cdfOf counts as a filter over the raw values does", () => {
    fc.assert(
      fc.property(samples, (sample) => {
        const view = cdfOf(sample);
        for (const [i, x] of view.values.entries()) {
          expect(view.below[i]).toBe(sample.filter((v) => v < x).length);
          expect(view.upTo[i]).toBe(sample.filter((v) => v <= x).length);
        }
        expect(view.upTo.at(-1)).toBe(sample.length);
      }),
      PROPERTY,
    );
  });
});
