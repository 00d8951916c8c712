import type { FeatureComparison } from "@moorline/answers";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import type { FileComparison } from "../src/compare/compare-files.js";
import { SeededRandom } from "../src/demo/random.js";
import { moorline, TestFolder } from "./capture-io.js";

interface Row {
  readonly temp: number | null;
  readonly doors: number;
  readonly depot: string;
}

const folder = new TestFolder();
afterAll(() => folder.remove());

function rowsOf(seed: number, count: number, shift: number): Row[] {
  return Array.from({ length: count }, (_, i) => {
    const random = new SeededRandom(seed, i);
    const temp =
      random.uniform() < 0.02
        ? null
        : 4 + random.uniform() + random.uniform() + random.uniform() + shift * random.uniform();
    return {
      temp,
      doors: random.uniform() < 0.6 ? 0 : Math.floor(5 * random.uniform()),
      depot: i % 3 === 0 ? "north" : "south",
    };
  });
}

const csvOf = (rows: readonly Row[]) =>
  `temp,doors,depot\n${rows.map((r) => `${r.temp ?? ""},${r.doors},${r.depot}`).join("\n")}\n`;

const BEFORE = rowsOf(1, 400, 0);
const AFTER = rowsOf(2, 300, 1.5);
const temps = (rows: readonly Row[]) => rows.map((row) => row.temp).filter((temp) => temp !== null);
const doors = (rows: readonly Row[]) => rows.map((row) => row.doors);

let before = "";
let after = "";
beforeAll(() => {
  before = folder.write("before.csv", csvOf(BEFORE));
  after = folder.write("after.csv", csvOf(AFTER));
});

/** The numeric columns of what the command printed. */
const numericOf = (out: string): FeatureComparison[] =>
  (JSON.parse(out) as FileComparison).features.flatMap((column) =>
    column.kind === "numeric" ? [column] : [],
  );

async function compared(...options: string[]): Promise<FeatureComparison[]> {
  const { out } = await moorline(["compare", before, after, "--format", "json", ...options]);
  return numericOf(out);
}

/** Share of values at or below x, by counting. */
const shareUpTo = (values: readonly number[], x: number) =>
  values.filter((value) => value <= x).length / values.length;

/** sup |F − G| over every value of either side, by counting. */
function ksByCounting(a: readonly number[], b: readonly number[]): number {
  return Math.max(...[...a, ...b].map((x) => Math.abs(shareUpTo(a, x) - shareUpTo(b, x))));
}

/** ∫ |F − G| over the steps, by counting. */
function wassersteinByCounting(a: readonly number[], b: readonly number[]): number {
  const steps = [...new Set([...a, ...b])].sort((x, y) => x - y);
  return steps
    .slice(0, -1)
    .reduce((area, x, i) => area + Math.abs(shareUpTo(a, x) - shareUpTo(b, x)) * (steps[i + 1]! - x), 0);
}

/** Type 7 of Hyndman & Fan. */
function quantileByInterpolation(values: readonly number[], rank: number): number {
  const sorted = [...values].sort((x, y) => x - y);
  const at = rank * (sorted.length - 1);
  const low = sorted[Math.floor(at)]!;
  const high = sorted[Math.ceil(at)]!;
  return low + (at - Math.floor(at)) * (high - low);
}

describe("moorline compare", () => {
  it.each([
    ["temp", temps],
    ["doors", doors],
  ] as const)(
    "gives the KS distance, Wasserstein distance and quantiles of %s that brute force gives",
    async (name, of) => {
      const [feature] = await compared("--feature", name);
      const [a, b] = [of(BEFORE), of(AFTER)];
      expect(feature!.n).toEqual({ baseline: a.length, production: b.length });
      expect(feature!.ks!.distance).toBeCloseTo(ksByCounting(a, b), 12);
      expect(feature!.wasserstein!.distance).toBeCloseTo(wassersteinByCounting(a, b), 12);
      const known = feature!.pairs.filter((pair) => pair.beyondData !== true);
      expect(known.length).toBeGreaterThan(20);
      for (const pair of known) {
        expect(pair.baseline).toBeCloseTo(quantileByInterpolation(a, pair.rank), 12);
        expect(pair.production).toBeCloseTo(quantileByInterpolation(b, pair.rank), 12);
      }
    },
  );

  it("prints exactly the contract's object, on one line, and ends with 1 when something is adrift", async () => {
    const { status, out, err } = await moorline(["compare", before, after, "--format", "json"]);
    expect(status).toBe(1);
    expect(err).toBe("");
    expect(out.endsWith("}\n") && out.indexOf("\n") === out.length - 1).toBe(true);
    const result = JSON.parse(out) as FileComparison;
    expect(Object.keys(result)).toEqual(["baseline", "production", "features"]);
    expect(result.baseline).toEqual({ source: before, rows: 400 });
    expect(result.production).toEqual({ source: after, rows: 300 });
    expect(result.features.map(({ feature, state }) => [feature, state])).toEqual([
      ["temp", "adrift"],
      ["doors", "holding"],
      ["depot", "holding"],
    ]);
    const [feature] = numericOf(out);
    const keys =
      "feature kind slice state reading pattern dependence n missing ks wasserstein tails tailRanks psi jensenShannon andersonDarling wassersteinNoise wassersteinTails psiNoise jensenShannonNoise missingChange pairs shift";
    expect(Object.keys(feature!)).toEqual(keys.split(" "));
    expect(Object.keys(feature!.ks!)).toEqual(["distance", "at", "direction", "pValue"]);
    expect(feature!.ks!.direction).toBe("below");
    const missing = { baseline: 1 - temps(BEFORE).length / 400, production: 1 - temps(AFTER).length / 300 };
    expect(feature!.missing.baseline).toBeCloseTo(missing.baseline, 12);
    expect(feature!.missing.production).toBeCloseTo(missing.production, 12);
    expect(Object.keys(feature!.tails!.upper!)).toEqual(
      expect.arrayContaining(["rank", "threshold", "exceedance", "ratio", "interval"]),
    );
    expect(feature!.pairs.map((pair) => pair.rank).slice(0, 3)).toEqual([0.001, 0.0025, 0.005]);
  });

  it("ends with 0 when everything holds", async () => {
    const { status, out } = await moorline(["compare", before, before]);
    expect(status).toBe(0);
    expect(out).toContain("holding");
  });

  it("compares apart by the values of a column", async () => {
    const features = await compared("--feature", "temp", "--slice-by", "depot");
    expect(features.map(({ slice }) => slice)).toEqual(["all", "depot=south", "depot=north"]);
    const north = (rows: readonly Row[]) => rows.filter(({ depot }) => depot === "north");
    expect(features[2]!.n.production).toBe(temps(north(AFTER)).length);
    expect(features[2]!.ks!.distance).toBeCloseTo(
      ksByCounting(temps(north(BEFORE)), temps(north(AFTER))),
      12,
    );
  });

  it("says thin, with nulls and no invented number, where a side has no value", async () => {
    const empty = folder.write("empty.csv", "temp,doors\n,1\n,2\n");
    const { out } = await moorline(["compare", before, empty, "--format", "json", "--feature", "temp"]);
    const [feature] = numericOf(out);
    expect(feature).toMatchObject({
      state: "thin",
      andersonDarling: null,
      wassersteinNoise: null,
      ks: null,
      tails: null,
      psi: null,
      pairs: [],
    });
    expect(feature!.reading).toContain("production has no finite value");
    expect(out).not.toMatch(/NaN|Infinity/);
  });

  it("prints a table and Markdown with the same states, and no control characters of the data", async () => {
    const odd = folder.write("odd.csv", csvOf(AFTER).replaceAll("north", "no\u001b[31mrth"));
    const table = await moorline(["compare", before, odd, "--feature", "temp", "--slice-by", "depot"]);
    expect(table.out).not.toContain("\u001b");
    expect(table.out).toContain("depot=no\\x1b[31mrth");
    const markdown = await moorline(["compare", before, after, "--format", "markdown"]);
    expect(markdown.out).toMatch(/\| temp \| all \| adrift \|/);
    expect(markdown.out).toMatch(/- \*\*temp\*\* \(all\): adrift: /);
  });

  it("reads files of different formats against each other", async () => {
    const lines = BEFORE.map((row) => JSON.stringify(row)).join("\n");
    const ndjson = folder.write("before.ndjson", `${lines}\n`);
    const { out } = await moorline(["compare", ndjson, before, "--format", "json"]);
    expect(numericOf(out).map(({ feature, ks }) => [feature, ks!.distance])).toEqual([
      ["temp", 0],
      ["doors", 0],
    ]);
  });

  const refused: readonly (readonly [string, string[], RegExp])[] = [
    ["a file that is not there", ["nowhere.csv", "@"], /no file matches nowhere\.csv; give the path/],
    [
      "a column that is not there",
      ["@", "@", "--feature", "tmp"],
      /has no column tmp \(did you mean temp\?\)/,
    ],
    [
      "a slice column that is not there",
      ["@", "@", "--slice-by", "carrier"],
      /has no column carrier; its columns are/,
    ],
    [
      "a format that is not there",
      ["@", "@", "--format", "xml"],
      /--format is "xml", which is not one of table, json, markdown/,
    ],
  ];
  it.each(refused)("refuses %s with 2 and one sentence", async (_, args, message) => {
    const { status, out, err } = await moorline([
      "compare",
      ...args.map((arg) => (arg === "@" ? before : arg)),
    ]);
    expect([status, out]).toEqual([2, ""]);
    expect(err).toMatch(message);
    expect(err.trimEnd().split("\n")).toHaveLength(1);
  });

  it("says when two files share no column", async () => {
    const words = folder.write("words.csv", "name,city\nana,bonn\n");
    const { status, err } = await moorline(["compare", before, words]);
    expect(status).toBe(2);
    expect(err).toMatch(/share no column of numbers or of text; name the same columns/);
  });
});
