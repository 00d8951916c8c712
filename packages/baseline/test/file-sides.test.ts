import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, describe, expect, it } from "vitest";
import { MOST_FILE_CATEGORIES } from "../src/files/category-counts.js";
import { DuckdbSession } from "../src/files/duckdb-session.js";
import { FileSides } from "../src/index.js";

const folder = mkdtempSync(join(tmpdir(), "moorline-sides-"));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

function write(name: string, text: string): string {
  const path = join(folder, name);
  writeFileSync(path, text);
  return path;
}

async function parquet(name: string, query: string): Promise<string> {
  const path = join(folder, name);
  const session = await DuckdbSession.open();
  await session.connection.run(`copy (${query}) to '${path}' (format parquet)`);
  await session.close();
  return path;
}

/** The counts of one column, as entries in the order of their names. */
async function countsOf(
  path: string,
  column: string,
  slice: string | null = null,
  sliceBy: string | null = null,
) {
  const sides = await FileSides.open(path);
  try {
    await sides.load({ numeric: [], categorical: [column] }, sliceBy);
    const { counts, ...rest } = await sides.categories(0, slice);
    return { ...rest, counts: [...counts].sort(([a], [b]) => (a < b ? -1 : 1)) };
  } finally {
    await sides.close();
  }
}

describe("FileSides.categories(index, sliceValue)", () => {
  const csv = () =>
    write("a.csv", 'k,depot,n,flag\na,x,1,true\n"b ""q""",y,2.0,FALSE\na,y,2,True\n,x,,\nNA,x,3e0,false\n');

  it("counts the categories of text with what is missing, of all rows and of a slice", async () => {
    expect(await countsOf(csv(), "k")).toEqual({
      events: 5,
      missing: 2,
      other: 0,
      counts: [
        ["a", 2],
        ['b "q"', 1],
      ],
    });
    expect(await countsOf(csv(), "k", "x", "depot")).toEqual({
      events: 3,
      missing: 2,
      other: 0,
      counts: [["a", 1]],
    });
    expect(await countsOf(csv(), "k", "o'hare", "depot")).toEqual({
      events: 0,
      missing: 0,
      other: 0,
      counts: [],
    });
  });

  it("writes numbers and flags alike, however a file has them", async () => {
    expect((await countsOf(csv(), "n")).counts).toEqual([
      ["1", 1],
      ["2", 2],
      ["3", 1],
    ]);
    expect((await countsOf(csv(), "flag")).counts).toEqual([
      ["false", 2],
      ["true", 2],
    ]);
    const columnar = await parquet(
      "a.parquet",
      "select * from (values (1.0::double, true, 1::int), (2.5, false, 2), (null, null, null)) t(n, flag, i)",
    );
    expect((await countsOf(columnar, "n")).counts).toEqual([
      ["1", 1],
      ["2.5", 1],
    ]);
    expect((await countsOf(columnar, "flag")).counts).toEqual([
      ["false", 1],
      ["true", 1],
    ]);
    expect(await countsOf(columnar, "i")).toMatchObject({ events: 3, missing: 1 });
  });

  it("reads text of Parquet and nested fields of NDJSON", async () => {
    const columnar = await parquet(
      "b.parquet",
      "select * from (values ('x'), ('y'), ('x'), (''), (null)) t(k)",
    );
    expect(await countsOf(columnar, "k")).toMatchObject({
      events: 5,
      missing: 1,
      counts: [
        ["", 1],
        ["x", 2],
        ["y", 1],
      ],
    });
    const lines = ['{"cargo":{"kind":"fish"}}', '{"cargo":{"kind":null}}', '{"cargo":{"kind":"fish"}}'];
    const ndjson = write("c.ndjson", `${lines.join("\n")}\n`);
    expect(await countsOf(ndjson, "cargo.kind")).toMatchObject({ missing: 1, counts: [["fish", 2]] });
  });

  it("keeps of a long text its beginning, length and hash; two that differ at the end are two", async () => {
    const long = (end: string) => `${"é".repeat(5000)}${end}`;
    const path = write("d.csv", `k\n${long("a")}\n${long("b")}\n${long("a")}\n`);
    const { counts } = await countsOf(path, "k");
    expect(counts.map(([, count]) => count).toSorted()).toEqual([1, 2]);
    for (const [name] of counts) {
      expect(name).toMatch(/^é{120}… \(5001 characters, [0-9a-f]{32}\)$/);
    }
  });

  it("keeps the most frequent categories of very many and counts the rest in other", async () => {
    const many = await parquet(
      "e.parquet",
      `select 'id-' || i as k from range(${MOST_FILE_CATEGORIES + 2000}) t(i) union all select 'id-9' from range(7)`,
    );
    const { counts, other, events } = await countsOf(many, "k");
    expect([counts.length, other, events]).toEqual([MOST_FILE_CATEGORIES, 2000, MOST_FILE_CATEGORIES + 2007]);
    expect(new Map(counts).get("id-9")).toBe(8);
  });
});

describe("FileSides.side(index, sliceValue)", () => {
  it("reads flags of text files as 1 and 0, an empty line as no value", async () => {
    const sides = await FileSides.open(write("f.csv", "flag\ntrue\nFALSE\n\nTrue\n"));
    await sides.load({ numeric: ["flag"], categorical: [] }, null);
    const { cdf, missing } = await sides.side(0, null);
    await sides.close();
    expect([[...cdf.values], [...cdf.upTo], missing]).toEqual([[0, 1], [1, 3], 1]);
  });
});
