import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { eventsAt, positionBetween } from "../src/events-at.js";
import { PROPERTY, samples, slopingViews } from "./kit/samples.js";

describe("eventsAt(view, x)", () => {
  test("eventsAt counts below and up to x as the raw values do, at, between and outside them", () => {
    fc.assert(
      fc.property(samples, fc.double({ min: -2e6, max: 2e6, noNaN: true }), (sample, between) => {
        const view = cdfOf(sample);
        for (const x of [...sample, between]) {
          expect(eventsAt(view, x)).toEqual({
            below: sample.filter((v) => v < x).length,
            upTo: sample.filter((v) => v <= x).length,
          });
        }
      }),
      PROPERTY,
    );
  });

  test("eventsAt of an empty view is 0 and 0", () => {
    expect(eventsAt(cdfOf([]), 3)).toEqual({ below: 0, upTo: 0 });
  });

  test("eventsAt interpolates between the right limit of one knot and the left limit of the next", () => {
    const view = {
      n: 10,
      values: Float64Array.of(0, 4),
      below: Float64Array.of(0, 6),
      upTo: Float64Array.of(2, 10),
      exact: false,
      rankErrorAt: () => 0,
    };
    expect(eventsAt(view, 1)).toEqual({ below: 3, upTo: 3 });
    expect(eventsAt(view, 4)).toEqual({ below: 6, upTo: 10 });
  });

  test("eventsAt never decreases as x grows and stays within 0 and n", () => {
    fc.assert(
      fc.property(slopingViews, (view) => {
        let previous = 0;
        for (let x = -60; x <= 1200; x += 7.3) {
          const { below, upTo } = eventsAt(view, x);
          expect(below).toBeGreaterThanOrEqual(previous);
          expect(upTo).toBeGreaterThanOrEqual(below);
          expect(upTo).toBeLessThanOrEqual(view.n);
          previous = upTo;
        }
      }),
      PROPERTY,
    );
  });
});

describe("positionBetween(x, from, to)", () => {
  test("positionBetween holds where the width overflows a double", () => {
    expect(positionBetween(0, -Number.MAX_VALUE, Number.MAX_VALUE)).toBe(0.5);
  });
});
