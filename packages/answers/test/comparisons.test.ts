import { categoryCountsOf, numericSideOf } from "@moorline/stats";
import { describe, expect, it } from "vitest";
import { compareCategoryFeature, compareFeature } from "../src/index.js";

// The statistics themselves are tested in packages/stats; here is what the objects of the contract hold, and that they are JSON.

const sequence = (length: number, of: (i: number) => number) => Array.from({ length }, (_, i) => of(i));

describe("compareFeature(feature, slice, baseline, production)", () => {
  it("has Anderson–Darling, noise and the change of missing values beside the comparison", () => {
    const baseline = numericSideOf([...sequence(400, (i) => i), ...Array<null>(4).fill(null)]);
    const production = numericSideOf([...sequence(300, (i) => i + 150), ...Array<null>(30).fill(null)]);
    const compared = compareFeature("temp", "all", baseline, production);
    expect(compared.state).toBe("adrift");
    expect(compared.andersonDarling!.pValue).toBeLessThan(1e-6);
    const { noise, aboveNoise, interval } = compared.wassersteinNoise!;
    expect([aboveNoise, noise > 0 && noise < compared.wasserstein!.distance]).toEqual([true, true]);
    expect(interval![0]).toBeLessThan(compared.wasserstein!.distance);
    expect(interval![1]).toBeGreaterThan(compared.wasserstein!.distance);
    expect(compared.wassersteinTails!.upper).toMatchObject({ aboveNoise: true });
    expect(compared.psi).toBeGreaterThan(compared.psiNoise!.upper99);
    expect(compared.jensenShannon).toBeGreaterThan(compared.jensenShannonNoise!.upper99);
    expect(compared.missingChange!.difference).toBeCloseTo(30 / 330 - 4 / 404, 12);
    expect(JSON.parse(JSON.stringify(compared))).toEqual(compared);
  });

  it("is null in place of what a side without finite values cannot give; missing values are told all the same", () => {
    const compared = compareFeature("temp", "all", numericSideOf([1, 2]), numericSideOf([null, null, null]));
    expect(compared).toMatchObject({
      state: "thin",
      andersonDarling: null,
      wassersteinNoise: null,
      wassersteinTails: null,
      psiNoise: null,
      jensenShannonNoise: null,
      missingChange: { baseline: 0, production: 1, difference: 1 },
    });
    expect(compareFeature("temp", "all", numericSideOf([]), numericSideOf([1])).missingChange).toBeNull();
  });
});

describe("the reading of compareFeature", () => {
  const wave = (length: number, of: (x: number) => number) =>
    numericSideOf(
      sequence(length, (i) => of(20 + 5 * Math.sqrt(-2 * Math.log((i + 0.5) / length)) * Math.cos(2.4 * i))),
    );
  const baseline = wave(8_000, (x) => x);

  it("is the verdict, then the pattern in the feature's unit where something is off", () => {
    const compared = compareFeature(
      "temp",
      "all",
      baseline,
      wave(3_000, (x) => 1.8 * x + 32),
      { unit: "°C" },
    );
    expect(compared).toMatchObject({
      state: "adrift",
      pattern: { kind: "unit change", figures: { factor: 1.8, offset: 32 } },
    });
    const [verdict, pattern] = compared.reading.split(". The pairs read: ");
    expect(verdict).not.toBe("");
    expect(pattern).toBe(compared.pattern.sentence);
    expect(pattern).toContain(
      "1.8 times the baseline's plus 32, as when degrees Celsius become degrees Fahrenheit",
    );
  });

  it("is the verdict alone where all holds or too little is known; the pattern stands in its own field", () => {
    const holding = compareFeature(
      "temp",
      "all",
      baseline,
      wave(3_000, (x) => x),
      { unit: "°C" },
    );
    expect([holding.state, holding.pattern.kind, holding.reading.includes("The pairs read")]).toEqual([
      "holding",
      "none",
      false,
    ]);
    const thin = compareFeature(
      "temp",
      "all",
      baseline,
      wave(3, (x) => x),
      { unit: "°C" },
    );
    expect([thin.state, thin.pattern.kind, thin.reading.includes("The pairs read")]).toEqual([
      "thin",
      "thin",
      false,
    ]);
  });
});

describe("compareCategoryFeature(feature, slice, baseline, production)", () => {
  it("lists at most 20 new and vanished categories and 10 movers, and says how many there are", () => {
    const names = (prefix: string, count: number) =>
      Array.from({ length: count }, (_, i) => Array<string>(50).fill(`${prefix}${i}`)).flat();
    const baseline = categoryCountsOf([...names("kept", 10), ...names("gone", 25)]);
    const production = categoryCountsOf([...names("kept", 10), ...names("fresh", 30)]);
    const compared = compareCategoryFeature("carrier", "depot=north", baseline, production);
    expect(compared).toMatchObject({
      feature: "carrier",
      kind: "categorical",
      slice: "depot=north",
      state: "adrift",
      categories: { baseline: 35, production: 40, new: 30, vanished: 25 },
      other: { baseline: 0, production: 0 },
    });
    expect([compared.new.length, compared.vanished.length, compared.movers.length]).toEqual([20, 20, 10]);
    expect(JSON.parse(JSON.stringify(compared))).toEqual(compared);
  });

  it("is null in place of every statistic where a side has no value", () => {
    const compared = compareCategoryFeature("carrier", "all", categoryCountsOf(["a"]), categoryCountsOf([]));
    expect(compared).toMatchObject({
      state: "thin",
      g: null,
      totalVariation: null,
      totalVariationNoise: null,
      new: [],
    });
  });
});
