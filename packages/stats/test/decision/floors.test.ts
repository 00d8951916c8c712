import { describe, expect, test } from "vitest";
import { DEFAULT_DECISION_RULE } from "../../src/decision/decision-rule.js";
import { isFarAtOnce, passesFloor, type WatchedPart } from "../../src/decision/floors.js";
import { standingOf } from "../../src/decision/standing.js";
import { signedRootDeviance } from "../../src/signed-root-deviance.js";

const rule = DEFAULT_DECISION_RULE;

describe("passesFloor(part, observed, expected, events, rule)", () => {
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
  ] as const)("passesFloor for $name: $floor", ({ of: [part, expected, observed, m], floor }) => {
    expect(passesFloor(part, observed, expected, m, rule)).toBe(floor);
  });
});

describe("isFarAtOnce(share, rule)", () => {
  test.each([
    { name: "the body by .15", of: ["body", 0.5, 0.66, 5000], atOnce: true },
    { name: "the body by .1, however certain", of: ["body", 0.5, 0.6, 500_000], atOnce: false },
    { name: "a tail five times as heavy", of: ["upper tail", 0.99, 0.95, 2000], atOnce: true },
    {
      name: "a tail three times as heavy, however certain",
      of: ["upper tail", 0.99, 0.97, 50_000],
      atOnce: false,
    },
    { name: "a far tail with 20 events", of: ["upper tail", 0.9999, 0.98, 1000], atOnce: false },
    { name: "a tenth missing, however certain", of: ["missing", 0.0001, 0.1, 5000], atOnce: false },
    { name: "a fifth missing", of: ["missing", 0.0001, 0.2, 5000], atOnce: true },
  ] as const)("isFarAtOnce for $name: $atOnce", ({ of: [part, expected, observed, events], atOnce }) => {
    expect(isFarAtOnce({ part, observed, expected, events }, rule)).toBe(atOnce);
  });
});

describe("standingOf(share, rule, designEffect)", () => {
  const share = (observed: number, proven = observed) => ({
    strictly: false,
    part: "body" as WatchedPart,
    rank: 0.5,
    value: 0,
    expected: 0.5,
    observed,
    proven,
    baselineEvents: 1_000_000,
    events: 1_000,
  });

  test("standingOf divides the events by the design effect", () => {
    const { z } = standingOf(share(0.6), rule, 4);
    expect(z).toBeCloseTo(standingOf(share(0.6), rule).z / 2, 2);
  });

  test("standingOf takes z from what a sketch proves and the floor from what was observed", () => {
    const { z, floorPassed } = standingOf(share(0.56, 0.52), rule);
    expect(floorPassed).toBe(true);
    expect(z).toBeCloseTo(signedRootDeviance(0.52, 0.5, (1000 * 1e6) / (1000 + 1e6)), 10);
  });
});
