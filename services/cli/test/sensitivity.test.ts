import type { SensitivityAnswer } from "@moorline/answers";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { moorline, TestFolder } from "./capture-io.js";
import { storedDays } from "./stored-days.js";

const folder = new TestFolder();
afterAll(() => folder.remove());
let config: string[] = [];
beforeAll(async () => {
  config = await storedDays(folder);
});

const sensitivity = async (...options: string[]) => {
  const ran = await moorline(["sensitivity", ...options, "--format", "json", ...config]);
  expect(ran).toMatchObject({ err: "", status: 0 });
  return JSON.parse(ran.out) as SensitivityAnswer;
};

describe("moorline sensitivity", () => {
  it("tells for each feature and horizon the smallest changes that page, and how soon", async () => {
    const { features, power } = await sensitivity();
    expect(power).toBe(0.9);
    expect(features.map(({ feature, horizon }) => `${feature} ${horizon}`)).toEqual([
      "x 5m",
      "x 1h",
      "y 5m",
      "y 1h",
    ]);
    const [minutes, hours] = features;
    // Forty events a minute are stored.
    expect(minutes).toMatchObject({
      eventsPerWindow: 200,
      eventsFrom: "stored windows",
      tolerance: { basis: "time", seasonal: false },
    });
    const sizes = (row: typeof minutes, change: string) =>
      row!.changes.find((one) => one.change === change)!.visible.map(({ size }) => size);
    for (const change of ["higher", "wider", "upper tail heavier", "missing more often"]) {
      const seen = sizes(minutes, change);
      expect(seen.length).toBeGreaterThan(1);
      for (const [i, size] of seen.entries()) if (i > 0) expect(size).toBeLessThan(seen[i - 1]!);
      expect(sizes(hours, change)[0]).toBeLessThan(seen[0]!);
    }
    // Never below the floors: .05 of the mass is .126 standard deviations of a normal feature.
    expect(sizes(hours, "higher").at(-1)).toBeGreaterThan(0.12);
    expect(sizes(hours, "upper tail heavier").at(-1)).toBeGreaterThan(1.5);
  });

  it("sees more with more events, and says that the far tail is out of reach with few", async () => {
    const few = await sensitivity("--feature", "x", "--events-per-window", "2");
    const many = await sensitivity("--feature", "x", "--events-per-window", "5000");
    const first = ({ features }: SensitivityAnswer) => features[0]!.changes[0]!.visible[0]!.size;
    expect(few.features[0]).toMatchObject({ eventsPerWindow: 2, eventsFrom: "given" });
    expect(first(few)).toBeGreaterThan(2 * first(many));
    expect(few.features[0]!.blindRanks).toEqual([0.001, 0.01, 0.99, 0.999]);
    expect(many.features[0]!.blindRanks).toEqual([]);
  });

  it("prints a table a horizon, with units and what it cannot see", async () => {
    const { out, status } = await moorline(["sensitivity", "--events-per-window", "2", ...config]);
    expect(status).toBe(0);
    expect(out).toContain("horizon 5m, slice all");
    expect(out).toMatch(/│ x +│ 2 +│ [\d.]+ °C in \d+/);
    expect(out).toMatch(/x, y: too few events ever lie beyond p0\.1, .*p99\.9 to page there/);
    expect(out).toContain("What is not seen here is not proof of safety.");
  });

  it.each(["0", "-3", "many", "1e3"])("refuses %s events per window in one sentence", async (count) => {
    const ran = await moorline(["sensitivity", `--events-per-window=${count}`, ...config]);
    expect(ran.status).toBe(2);
    expect(ran.err).toMatch(/--events-per-window .* a number above 0/);
  });
});
