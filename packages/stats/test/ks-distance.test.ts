import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cdfOf } from "../src/cdf-of.js";
import { eventsAt } from "../src/events-at.js";
import { ksDistance } from "../src/ks-distance.js";
import { bruteKs, shareAtMost, shareBelow } from "./kit/brute-force.js";
import { PROPERTY, samples, slopingViews } from "./kit/samples.js";

const ks = (a: readonly number[], b: readonly number[]) => ksDistance(cdfOf(a), cdfOf(b));

describe("ksDistance(baseline, production)", () => {
  test.each([
    { a: [1], b: [1], distance: 0, at: 1, direction: "below" },
    { a: [1], b: [2], distance: 1, at: 1, direction: "below" },
    { a: [2], b: [1], distance: 1, at: 1, direction: "above" },
    { a: [1, 2], b: [3, 4], distance: 1, at: 2, direction: "below" },
    { a: [1, 1, 1], b: [1, 1, 2], distance: 1 / 3, at: 1, direction: "below" },
    { a: [0, 0, 0, 1], b: [0, 1, 1, 1], distance: 0.5, at: 0, direction: "below" },
    { a: [-Number.MAX_VALUE], b: [Number.MAX_VALUE], distance: 1, at: -Number.MAX_VALUE, direction: "below" },
  ])("ksDistance($a, $b) is $distance at $at, production $direction", ({ a, b, ...expected }) => {
    expect(ks(a, b)).toEqual(expected);
  });

  test("ksDistance equals the greatest difference counted on raw values", () => {
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        expect(Math.abs(ks(a, b).distance - bruteKs(a, b))).toBeLessThanOrEqual(4 * Number.EPSILON);
      }),
      PROPERTY,
    );
  });

  test("ksDistance is reached at `at`, on the side that `direction` says", () => {
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        const { distance, at, direction } = ks(a, b);
        const sign = direction === "above" ? 1 : -1;
        const limits = [shareAtMost(b, at) - shareAtMost(a, at), shareBelow(b, at) - shareBelow(a, at)];
        expect(Math.max(...limits.map((d) => d * sign))).toBeCloseTo(distance, 12);
      }),
      PROPERTY,
    );
  });

  test("ksDistance is symmetric, and only the direction turns", () => {
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        expect(ks(a, b).distance).toBe(ks(b, a).distance);
      }),
      PROPERTY,
    );
  });

  test("ksDistance of a sample to itself, in any order, is exactly 0", () => {
    fc.assert(
      fc.property(samples, (a) => {
        expect(ks(a, [...a].reverse()).distance).toBe(0);
      }),
      PROPERTY,
    );
  });

  test("ksDistance of disjoint samples is exactly 1", () => {
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        const gap = Math.max(...a) - Math.min(...b) + 1;
        const moved = b.map((v) => v + gap + Math.abs(gap));
        fc.pre(Math.min(...moved) > Math.max(...a));
        expect(ks(a, moved).distance).toBe(1);
      }),
      PROPERTY,
    );
  });

  test("ksDistance is unchanged by an increasing transform of both samples", () => {
    const cube = (v: number) => v * v * v;
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        // Tiny values would underflow to equal cubes: a transform must be strictly increasing to qualify.
        fc.pre([...a, ...b].every((v) => v === 0 || Math.abs(v) > 1e-90));
        const distinct = (xs: readonly number[]) => new Set(xs.map((v) => v + 0)).size;
        fc.pre(distinct([...a, ...b]) === distinct([...a, ...b].map(cube)));
        expect(ks(a.map(cube), b.map(cube)).distance).toBe(ks(a, b).distance);
      }),
      PROPERTY,
    );
  });

  test("ksDistance of a sample repeated k times is that of the sample", () => {
    fc.assert(
      fc.property(samples, samples, (a, b) => {
        expect(ks([...a, ...a, ...a], b).distance).toBeCloseTo(ks(a, b).distance, 12);
      }),
      PROPERTY,
    );
  });

  test("ksDistance of sloping views is the greatest one-sided difference over both knot sets, and no point exceeds it", () => {
    fc.assert(
      fc.property(slopingViews, slopingViews, (a, b) => {
        const { distance } = ksDistance(a, b);
        const differences = (x: number) => {
          const f = eventsAt(a, x);
          const g = eventsAt(b, x);
          return [Math.abs(f.below / a.n - g.below / b.n), Math.abs(f.upTo / a.n - g.upTo / b.n)];
        };
        const knots = [...a.values, ...b.values];
        expect(Math.max(...knots.flatMap(differences))).toBeCloseTo(distance, 12);
        for (let x = -50; x < 1200; x += 3.7) {
          expect(Math.max(...differences(x))).toBeLessThanOrEqual(distance + 1e-12);
        }
      }),
      { ...PROPERTY, numRuns: 100 },
    );
  });

  test.each([
    { a: [], b: [1] },
    { a: [1], b: [] },
  ])("ksDistance($a, $b) refuses a side without values", ({ a, b }) => {
    expect(() => ks(a, b)).toThrowError(expect.objectContaining({ code: "MOORLINE_INPUT_EMPTY_SAMPLE" }));
  });
});
