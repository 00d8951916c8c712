import { describe, expect, it } from "vitest";
import { chooseAxis, countText, markerKind, numberText, qqPlotSvg, rankText } from "../src/index.js";

const pair = (
  rank: number,
  baseline: number,
  production: number,
  low: number | null,
  high: number | null,
) => ({
  rank,
  baseline,
  production,
  low,
  high,
});

const data = {
  feature: "cargo_temp",
  unit: "°C",
  n: { baseline: 200_000, production: 1_000 },
  provenance: "chill-risk, slice all, 10:00 to 11:00 UTC, baseline 3f2a",
  pairs: [
    pair(0.01, 1.2, 1.3, 1, 1.6),
    pair(0.25, 3, 3.1, 2.8, 3.3),
    pair(0.5, 4, 4, 3.9, 4.1),
    pair(0.95, 6, 8.5, 7.9, 9),
    pair(0.99, 7, 11, 10, 12.5),
    { rank: 0.999, baseline: 8, production: null, low: null, high: null },
  ],
};

describe("qqPlotSvg", () => {
  it("draws one mark a pair that has both values, tails as triangles, differences filled", () => {
    const svg = qqPlotSvg(data);
    expect(svg.match(/class="mark/g)).toHaveLength(5);
    expect(svg.match(/class="mark outside"/g)).toHaveLength(2);
    expect(svg.match(/<circle class="mark"/g)).toHaveLength(2);
    expect(svg).toContain("Differences beyond the band: p95, p99.");
    expect(svg).toContain('xmlns="http://www.w3.org/2000/svg"');
    expect(svg).toContain("n = 200,000");
    expect(svg).toContain(data.provenance);
  });

  it("never writes a NaN, also for equal values, one pair and none", () => {
    const flat = [pair(0.25, 5, 5, 5, 5), pair(0.5, 5, 5, 5, 5)];
    for (const pairs of [flat, flat.slice(0, 1), [], [pair(0.5, 0, 0, null, null)]]) {
      expect(qqPlotSvg({ ...data, pairs })).not.toMatch(/NaN|Infinity|undefined/);
    }
  });

  it("shows any name as text", () => {
    const svg = qqPlotSvg({
      ...data,
      feature: `<script>alert("x")</script>`,
      unit: `"><g/onload=x>`,
      provenance: "‮abc&",
    });
    expect(svg).not.toContain("<script");
    expect(svg).not.toContain("<g/onload");
    expect(svg).toContain("&lt;script");
  });

  it("is the same for the same data", () => {
    expect(qqPlotSvg(data)).toBe(qqPlotSvg(structuredClone(data)));
  });
});

describe("markerKind", () => {
  it("is outside where the baseline's quantile is not in the band around production's", () => {
    expect(markerKind(pair(0.5, 4, 4.5, 4.2, 4.8))).toEqual({ part: "body", outside: true });
    expect(markerKind(pair(0.05, 4, 4.1, 3.9, 4.3))).toEqual({ part: "lower tail", outside: false });
    expect(markerKind(pair(0.95, 4, 9, null, null))).toEqual({ part: "upper tail", outside: false });
  });
});

describe("chooseAxis", () => {
  it.each([
    [[1, 2, 3], "linear"],
    [[0.01, 1, 50], "log"],
    [[0, 1, 2, 1_000], "symlog"],
    [[-5, 0.1, 0.2, 900], "symlog"],
    [[0, 0], "linear"],
    [[-3, 4], "linear"],
  ] as const)("of %j is %s", (values, kind) => {
    expect(chooseAxis([...values])).toBe(kind);
  });
});

describe("numbers in words", () => {
  it.each([
    [0, "0"],
    [1_234_567, "1.23e6"],
    [123_456, "123,456"],
    [Math.PI, "3.142"],
    [-0.00012, "-1.2e-4"],
    [12.5, "12.5"],
    [100, "100"],
  ])("numberText(%d) is %s", (value, text) => {
    expect(numberText(value)).toBe(text);
  });

  it("rankText and countText", () => {
    expect([0.001, 0.075, 0.5, 0.999].map(rankText)).toEqual(["p0.1", "p7.5", "p50", "p99.9"]);
    expect(countText(2_592_000)).toBe("2,592,000");
  });
});
