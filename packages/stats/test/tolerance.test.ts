import { describe, expect, test } from "vitest";
import { DEFAULT_DECISION_RULE } from "../src/decision-rule.js";
import { signedRootDeviance } from "../src/signed-root-deviance.js";
import { standingOf } from "../src/tolerance.js";
import type { WatchedShare } from "../src/watched-share.js";

/** A watched share of a window of `m` events against a baseline of a million. */
function share(part: WatchedShare["part"], expected: number, observed: number, m: number): WatchedShare {
  return {
    key: "p",
    part,
    rank: part === "missing" ? null : expected,
    value: part === "missing" ? null : 0,
    expected,
    observed,
    proven: observed,
    baselineEvents: 1_000_000,
    productionEvents: m,
  };
}

const standing = (...args: Parameters<typeof share>) => standingOf(share(...args), DEFAULT_DECISION_RULE);

describe("standingOf(share, rule)", () => {
  test.each([
    { name: "the body moved by .05", of: ["body", 0.5, 0.551, 5000], floor: true },
    { name: "the body moved by .049", of: ["body", 0.5, 0.549, 5000], floor: false },
    { name: "the body moved down by .05", of: ["body", 0.25, 0.199, 5000], floor: true },
    { name: "an upper tail 1.5 times as heavy", of: ["upper tail", 0.99, 0.9849, 5000], floor: true },
    { name: "an upper tail 1.4 times as heavy", of: ["upper tail", 0.99, 0.986, 5000], floor: false },
    { name: "a lower tail 1.5 times as heavy", of: ["lower tail", 0.01, 0.0151, 5000], floor: true },
    { name: "a tail twice as heavy with 10 events", of: ["lower tail", 0.01, 0.02, 500], floor: true },
    { name: "a tail twice as heavy with 9 events", of: ["lower tail", 0.01, 0.02, 450], floor: false },
    { name: "a tail half as heavy with 20 expected", of: ["lower tail", 0.01, 0.005, 2000], floor: true },
    { name: "a tail half as heavy with 19 expected", of: ["lower tail", 0.01, 0.005, 1900], floor: false },
    { name: "an empty upper tail with 50 expected", of: ["upper tail", 0.99, 1, 5000], floor: true },
    { name: "a tail .6 times as heavy", of: ["lower tail", 0.01, 0.006, 5000], floor: false },
    { name: "half a percent missing where none was", of: ["missing", 0.0001, 0.0052, 5000], floor: true },
    {
      name: "a quarter of a percent missing where none was",
      of: ["missing", 0.0001, 0.0026, 5000],
      floor: false,
    },
    { name: "half as much again missing", of: ["missing", 0.1, 0.151, 5000], floor: true },
    { name: "a third more missing", of: ["missing", 0.1, 0.133, 5000], floor: false },
    { name: "fewer missing by half", of: ["missing", 0.1, 0.049, 5000], floor: true },
  ] as const)("standingOf $name: floor passed $floor", ({ of: [part, expected, observed, m], floor }) => {
    expect(standing(part, expected, observed, m).floorPassed).toBe(floor);
  });

  test("standingOf is beyond only where the difference is not for want of data", () => {
    expect(standing("body", 0.5, 0.56, 100)).toMatchObject({ floorPassed: true, beyond: false });
    expect(standing("body", 0.5, 0.56, 1000)).toMatchObject({ floorPassed: true, beyond: true });
  });

  test.each([
    { name: "the body by .15 with |z| over 10", of: ["body", 0.5, 0.66, 5000], atOnce: true },
    { name: "the body by .1, however certain", of: ["body", 0.5, 0.6, 500_000], atOnce: false },
    { name: "the body by .3 with |z| of 6", of: ["body", 0.5, 0.8, 80], atOnce: false },
    { name: "a tail five times as heavy", of: ["upper tail", 0.99, 0.95, 2000], atOnce: true },
    {
      name: "a tail three times as heavy, however certain",
      of: ["upper tail", 0.99, 0.97, 50_000],
      atOnce: false,
    },
    { name: "a far tail with 20 events", of: ["upper tail", 0.9999, 0.98, 1000], atOnce: false },
    { name: "a tenth missing, however certain", of: ["missing", 0.0001, 0.1, 5000], atOnce: false },
    { name: "a fifth missing", of: ["missing", 0.0001, 0.2, 5000], atOnce: true },
  ] as const)("standingOf $name: at once $atOnce", ({ of: [part, expected, observed, m], atOnce }) => {
    expect(standing(part, expected, observed, m).atOnce).toBe(atOnce);
  });

  test("standingOf divides the events by the design effect", () => {
    const rule = { ...DEFAULT_DECISION_RULE, designEffect: 4 };
    const { z } = standingOf(share("body", 0.5, 0.6, 1000), rule);
    expect(z).toBeCloseTo(standing("body", 0.5, 0.6, 1000).z / 2, 10);
  });

  test("standingOf takes z from what a sketch proves and the floor from what was observed", () => {
    const read = { ...share("body", 0.5, 0.56, 2000), proven: 0.52 };
    const { z, floorPassed } = standingOf(read, DEFAULT_DECISION_RULE);
    expect(floorPassed).toBe(true);
    expect(z).toBeCloseTo(signedRootDeviance(0.52, 0.5, (2000 * 1e6) / (2000 + 1e6)), 10);
  });
});
