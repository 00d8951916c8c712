import { describe, expect, it } from "vitest";
import { shiftPlotSvg } from "../src/index.js";

const point = (rank: number, difference: number | null, low: number | null, high: number | null) => ({
  rank,
  difference,
  low,
  high,
});

const data = {
  feature: "cargo_temp",
  unit: "°C",
  provenance: "chill-risk, slice all, 10:00 to 11:00 UTC, baseline 3f2a",
  shift: [
    point(0.01, 0.1, -0.4, 0.5),
    point(0.25, 0.1, -0.1, 0.3),
    point(0.5, 0, -0.1, 0.1),
    point(0.95, 2.5, 1.9, 3),
    point(0.99, 4, 3, null),
    point(0.999, null, null, null),
  ],
};

describe("shiftPlotSvg", () => {
  it("draws one mark a rank that the data reach, tails as triangles, those beyond the band filled", () => {
    const svg = shiftPlotSvg(data);
    expect(svg.match(/class="mark/g)).toHaveLength(5);
    expect(svg.match(/class="mark outside"/g)).toHaveLength(2);
    expect(svg.match(/<circle class="mark"/g)).toHaveLength(2);
    expect(svg.match(/class="band"/g)).toHaveLength(1);
  });

  it("says the same in words", () => {
    const svg = shiftPlotSvg(data);
    expect(svg).toContain("<title>Shift function of cargo_temp</title>");
    expect(svg).toContain(
      "Production less baseline at 5 ranks. Beyond the band: p95 by 2.5 °C, p99 by 4 °C.",
    );
    expect(svg).toContain(data.provenance);
    const quiet = shiftPlotSvg({ ...data, shift: data.shift.slice(0, 3) });
    expect(quiet).toContain("No change stays within the band at every rank.");
  });

  it("never writes a NaN, also without change, with one rank, with none and with the largest doubles", () => {
    const huge = Number.MAX_VALUE;
    for (const shift of [
      [point(0.25, 0, 0, 0), point(0.5, 0, 0, 0)],
      [point(0.5, 0, null, null)],
      [],
      [point(0.999, null, null, null)],
      [point(0.25, -huge, -huge, 0), point(0.5, huge, 0, huge)],
      [point(0.25, 1e-3, 0, 1), point(0.5, 5e6, 0, 9e6), point(0.75, -3, -4, 0)],
    ]) {
      expect(shiftPlotSvg({ ...data, shift })).not.toMatch(/NaN|Infinity|undefined/);
    }
  });

  it("shows any name as text", () => {
    const svg = shiftPlotSvg({ ...data, feature: `<script>alert("x")</script>`, unit: `"><g/onload=x>` });
    expect(svg).not.toContain("<script");
    expect(svg).not.toContain("<g/onload");
  });
});
