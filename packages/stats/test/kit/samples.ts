import fc from "fast-check";
import type { CdfView } from "../../src/cdf-view.js";

/** Every property of this package runs from one seed; a failure prints it with the path to the counterexample. */
export const PROPERTY = { seed: 20260112, numRuns: 300 } as const;

const continuous = fc.double({ min: -1e6, max: 1e6, noNaN: true });
const fewValues = fc.integer({ min: -3, max: 3 });

/** Samples of 1 to 40 values: continuous, heavily tied, or mixed. */
export const samples = fc.oneof(
  fc.array(continuous, { minLength: 1, maxLength: 40 }),
  fc.array(fewValues, { minLength: 1, maxLength: 40 }),
  fc.array(fc.oneof(continuous, fewValues), { minLength: 1, maxLength: 40 }),
);

/** Views that interpolate between knots and jump at some of them, as a sketch with atoms does. */
export const slopingViews: fc.Arbitrary<CdfView> = fc
  .array(
    fc.record({
      step: fc.double({ min: 1e-3, max: 100, noNaN: true }),
      slope: fc.oneof(fc.constant(0), fc.double({ min: 0, max: 20, noNaN: true })),
      jump: fc.oneof(fc.constant(0), fc.integer({ min: 1, max: 9 })),
    }),
    { minLength: 1, maxLength: 12 },
  )
  .map((pieces) => {
    let x = -50;
    let events = 0;
    const values: number[] = [];
    const below: number[] = [];
    const upTo: number[] = [];
    for (const [i, { step, slope, jump }] of pieces.entries()) {
      x += step;
      if (i > 0) events += slope;
      values.push(x);
      below.push(events);
      // The first knot always jumps, so that no view is empty.
      events += i === 0 ? jump + 1 : jump;
      upTo.push(events);
    }
    return {
      n: events,
      values: Float64Array.from(values),
      below: Float64Array.from(below),
      upTo: Float64Array.from(upTo),
      exact: false,
      rankErrorAt: () => 0.001,
    };
  });
