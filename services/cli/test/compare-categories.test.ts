import type { CategoryComparison } from "@moorline/answers";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import type { FileComparison } from "../src/compare/compare-files.js";
import { moorline, TestFolder } from "./capture-io.js";

interface Row {
  readonly carrier: string | null;
  readonly zone: number;
  readonly cold: boolean;
  readonly at: string;
}

const folder = new TestFolder();
afterAll(() => folder.remove());

/** `counts` of each carrier, in turn, with a zone from 1 to 3. */
function rowsOf(counts: Readonly<Record<string, number>>, missing = 0): Row[] {
  const carriers: (string | null)[] = Object.entries(counts).flatMap(([name, count]) =>
    Array<string>(count).fill(name),
  );
  carriers.push(...Array<null>(missing).fill(null));
  return carriers.map((carrier, i) => ({
    carrier,
    zone: 1 + (i % 3),
    cold: i % 2 === 0,
    at: `2026-11-0${1 + (i % 9)}T00:00:00Z`,
  }));
}

const cell = (text: string | null) => (text === null ? "" : `"${text.replaceAll('"', '""')}"`);
const csvOf = (rows: readonly Row[]) =>
  `carrier,zone,cold,at\n${rows.map((r) => `${cell(r.carrier)},${r.zone},${r.cold},${r.at}`).join("\n")}\n`;

const BEFORE = rowsOf({ north: 600, south: 300, east: 80, west: 20 }, 10);
const AFTER = rowsOf({ north: 200, south: 250, east: 30, upper: 20 }, 5);

let before = "";
let after = "";
beforeAll(() => {
  before = folder.write("before.csv", csvOf(BEFORE));
  after = folder.write("after.csv", csvOf(AFTER));
});

const categoriesOf = (out: string): CategoryComparison[] =>
  (JSON.parse(out) as FileComparison).features.flatMap((column) =>
    column.kind === "categorical" ? [column] : [],
  );

async function compared(files: readonly string[], ...options: string[]): Promise<CategoryComparison[]> {
  const { out } = await moorline(["compare", ...files, "--format", "json", ...options]);
  return categoriesOf(out);
}

describe("moorline compare on text columns", () => {
  it("prints exactly the contract's object and ends with 1 when a category is adrift", async () => {
    const { status, out, err } = await moorline(["compare", before, after, "--format", "json"]);
    expect(status).toBe(1);
    expect(err).toBe("not compared, for they are neither numbers in both files nor text in both: at\n");
    const result = JSON.parse(out) as FileComparison;
    expect(result.features.map(({ feature, kind }) => [feature, kind])).toEqual([
      ["carrier", "categorical"],
      ["zone", "numeric"],
      ["cold", "numeric"],
    ]);
    const [carrier] = categoriesOf(out);
    const keys =
      "feature kind slice state reading n missing missingChange categories g chiSquare psi psiNoise jensenShannon jensenShannonNoise totalVariation totalVariationNoise unseen new vanished movers other";
    expect(Object.keys(carrier!)).toEqual(keys.split(" "));
    expect(carrier).toMatchObject({
      slice: "all",
      state: "adrift",
      n: { baseline: 1000, production: 500 },
      missing: { baseline: 10 / 1010, production: 5 / 505 },
      categories: { baseline: 4, production: 4, new: 1, vanished: 1 },
      other: { baseline: 0, production: 0 },
    });
    expect(carrier!.reading).toMatch(/category "(north|south)": \d\d\.0 % of values, the baseline has/);
    expect(Object.keys(carrier!.g!)).toEqual(["statistic", "df", "pValue"]);
  });

  it("gives the counts, distances and statistics that counting by hand gives", async () => {
    const [carrier] = await compared([before, after]);
    // north .6 → .4, south .3 → .5, east .08 → .06, west .02 → 0, upper 0 → .04.
    expect(carrier!.totalVariation).toBeCloseTo(0.24, 12);
    expect(carrier!.new).toHaveLength(1);
    expect(carrier!.new[0]).toMatchObject({ category: "upper", count: 20, share: 0.04 });
    expect(carrier!.vanished[0]).toMatchObject({ category: "west", baselineShare: 0.02, expected: 10 });
    expect(
      carrier!.movers
        .map(({ category }) => category)
        .slice(0, 2)
        .toSorted(),
    ).toEqual(["north", "south"]);
    const cells = [
      [600, 200],
      [300, 250],
      [80, 30],
      [20, 0],
      [0, 20],
    ] as const;
    let g = 0;
    for (const [b, p] of cells) {
      for (const [observed, total] of [
        [b, 1000],
        [p, 500],
      ] as const) {
        if (observed > 0) g += 2 * observed * Math.log((observed * 1500) / (total * (b + p)));
      }
    }
    expect(carrier!.g!.statistic).toBeCloseTo(g, 8);
    expect(carrier!.g!.df).toBe(4);
  });

  it("compares columns named by --categorical by their categories, numbers written alike in any format", async () => {
    const lines = BEFORE.map((row) => JSON.stringify({ ...row, zone: row.zone + 0.0 })).join("\n");
    const ndjson = folder.write("before.ndjson", `${lines}\n`);
    const floats = folder.write(
      "floats.csv",
      csvOf(BEFORE)
        .replace(/",([123]),/g, '",$1.0,')
        .replace(/^,([123]),/gm, ",$1.0,"),
    );
    for (const file of [ndjson, floats]) {
      const columns = await compared([before, file], "--categorical", "zone", "cold");
      expect(columns.map(({ feature, state }) => [feature, state])).toEqual([
        ["carrier", "holding"],
        ["zone", "holding"],
        ["cold", "holding"],
      ]);
      for (const column of columns) expect(column.totalVariation).toBe(0);
      expect(columns[1]!.categories).toMatchObject({ baseline: 3, production: 3 });
    }
  });

  it("compares categories apart by the values of a column", async () => {
    const columns = await compared([before, after], "--feature", "carrier", "--slice-by", "zone");
    expect(columns.map(({ slice }) => slice)).toEqual(["all", "zone=1", "zone=2", "zone=3"]);
    expect(columns[1]!.n.production).toBe(
      AFTER.filter(({ carrier, zone }) => carrier !== null && zone === 1).length,
    );
    expect(columns[1]!.new[0]!.count).toBe(
      AFTER.filter(({ carrier, zone }) => carrier === "upper" && zone === 1).length,
    );
  });

  it("shows categorical columns in the table and in Markdown", async () => {
    const table = await moorline(["compare", before, after]);
    expect(table.out).toMatch(/│ carrier\s*│ all\s*│ adrift\s*│ 500\s*│ 0\.99 %\s*│ 4\s*│ 24 %/);
    expect(table.out).toMatch(/carrier \(all\) adrift: .*category "/);
    const markdown = await moorline(["compare", before, after, "--format", "markdown"]);
    expect(markdown.out).toMatch(/\| carrier \| all \| adrift \| 500 \| 0\.99 % \| 4 \| 24 % \|/);
    expect(markdown.out).toMatch(/- \*\*carrier\*\* \(all\): adrift: /);
    const alone = await moorline(["compare", before, after, "--feature", "carrier", "--format", "markdown"]);
    expect(alone.out).not.toContain("W1 scaled");
  });

  it("takes hostile names as data: none is lost, none takes effect where it is shown", async () => {
    const hostile = [
      "__proto__",
      "constructor",
      "<img src=x onerror=alert(1)>",
      "a|b",
      "\u001b[31mred",
      "x".repeat(10_000),
    ];
    const counts = Object.fromEntries(
      hostile.map((name, i) => [name, 40 + i]).filter(([name]) => name !== "__proto__"),
    );
    const rows = [
      ...rowsOf(counts),
      ...Array.from({ length: 45 }, () => ({ ...BEFORE[0]!, carrier: "__proto__" })),
    ];
    const odd = folder.write("odd.csv", csvOf(rows));
    const [carrier] = await compared([before, odd], "--feature", "carrier");
    expect(carrier!.categories.production).toBe(6);
    expect(carrier!.new.map(({ category }) => category)).toEqual(expect.arrayContaining(hostile.slice(0, 5)));
    const long = carrier!.new.find(({ category }) => category.startsWith("xxx"))!;
    expect(long.category.length).toBeLessThan(257);
    expect(long.category).toContain("(10000 characters, ");
    for (const format of ["table", "markdown"]) {
      const { out } = await moorline(["compare", before, odd, "--feature", "carrier", "--format", format]);
      expect(out).not.toContain("\u001b");
      if (format === "markdown") expect(out).not.toMatch(/[^\\]<img/);
    }
  });

  it("counts what is beyond the most frequent 100,000 categories in other, and calls none of it new", async () => {
    const ids = (from: number) =>
      `id\n${Array.from({ length: 100_500 }, (_, i) => `p${from + i}`).join("\n")}\n`;
    const files = [folder.write("ids-1.csv", ids(0)), folder.write("ids-2.csv", ids(50_000))];
    const [id] = await compared(files);
    expect(id!.n).toEqual({ baseline: 100_500, production: 100_500 });
    expect(id!.other.baseline).toBeCloseTo(500 / 100_500, 12);
    expect(id).toMatchObject({ new: [], vanished: [], unseen: null, state: "holding" });
  });

  it("says thin, with nulls and no invented number, where a side has no value", async () => {
    const empty = folder.write("empty.csv", "carrier,zone\n,1\n,2\n");
    const { out } = await moorline(["compare", before, empty, "--format", "json", "--feature", "carrier"]);
    expect(out).not.toMatch(/NaN|Infinity/);
    expect(categoriesOf(out)[0]).toMatchObject({ state: "thin", g: null, psi: null, new: [], movers: [] });
    expect(categoriesOf(out)[0]!.reading).toBe("too few values to tell: production has no value");
  });

  it("leaves out a column that is text in one file and numbers in the other, and says so", async () => {
    const mixed = folder.write("mixed.csv", "carrier,zone\nnorth,one\nsouth,two\n");
    const { err } = await moorline(["compare", before, mixed]);
    expect(err).toMatch(/not compared, for they are neither numbers in both files nor text in both: zone/);
  });

  it("refuses a categorical column that is not there with 2 and one sentence", async () => {
    const { status, out, err } = await moorline(["compare", before, after, "--categorical", "carier"]);
    expect([status, out]).toEqual([2, ""]);
    expect(err).toMatch(/has no column carier \(did you mean carrier\?\)/);
  });
});
