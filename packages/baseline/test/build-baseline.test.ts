import { rmSync } from "node:fs";
import { NumericSketch } from "@moorline/sketch";
import { numericSideOf, quantileOf } from "@moorline/stats";
import { afterAll, describe, expect, it } from "vitest";
import {
  type BaselineManifest,
  BLOCK_COUNTS,
  type BuiltBaseline,
  buildBaseline,
  decodeBlockCounts,
  type ReadProgress,
  sideOfPart,
} from "../src/index.js";
import {
  folder,
  type SampleRow,
  sampleRows,
  sampleStream,
  writeFileOf,
  writeNdjson,
  writeParquet,
  writeSeparated,
} from "./sample-rows.js";

afterAll(() => rmSync(folder, { recursive: true, force: true }));

const ROWS = sampleRows(20_000);
const request = { stream: sampleStream(), createdBy: "test", createdAtMs: 1, note: "first" };
const manifestOfBuilt = (built: BuiltBaseline) => built.record.manifest as BaselineManifest;
const wholeOf = (built: BuiltBaseline, slice: string, feature: string) =>
  built.parts.find((part) => part.slice === slice && part.feature === feature && part.block === -1);
const blockCountsOf = (built: BuiltBaseline, slice: string, feature: string) =>
  decodeBlockCounts(
    built.parts.find((p) => p.slice === slice && p.feature === feature && p.block === BLOCK_COUNTS)!.body,
  );

const temps = (rows: readonly SampleRow[]) => rows.map(({ temp }) => temp).filter((temp) => temp !== null);

describe("buildBaseline", () => {
  it("gives the same id for the same rows, whatever the file format, and whoever set it when", async () => {
    const csv = writeSeparated("train.csv", ROWS, ",");
    const files = [
      writeNdjson("train.ndjson", ROWS),
      csv,
      writeSeparated("train.tsv", ROWS, "\t"),
      await writeParquet("train.parquet", csv),
    ];
    const ids = new Set<string>();
    for (const [index, from] of files.entries()) {
      const built = await buildBaseline({
        ...request,
        from,
        createdBy: `p${index}`,
        createdAtMs: index,
        note: from,
      });
      ids.add(built.record.id);
    }
    expect([...ids]).toEqual([expect.stringMatching(/^[0-9a-f]{64}$/)]);
  });

  it("gives another id when one value changes, a row goes, or the stream is another", async () => {
    const base = await buildBaseline({ ...request, from: writeNdjson("a.ndjson", ROWS) });
    const changed = ROWS.with(777, { ...ROWS[777]!, temp: 99 });
    const ids = [base.record.id];
    for (const rows of [changed, ROWS.slice(1)]) {
      ids.push((await buildBaseline({ ...request, from: writeNdjson("b.ndjson", rows) })).record.id);
    }
    const stream = { ...request.stream, name: "other" };
    ids.push((await buildBaseline({ ...request, stream, from: writeNdjson("b.ndjson", ROWS) })).record.id);
    expect(new Set(ids).size).toBe(4);
  });

  it("gives the same id for rows whose time puts them in order again, and another where only their order tells", async () => {
    const swapped = ROWS.with(0, ROWS[19_000]!).with(19_000, ROWS[0]!);
    const ids = async (eventTime: string) => {
      const stream = sampleStream(eventTime);
      const [a, b] = [writeNdjson("a.ndjson", ROWS), writeNdjson("b.ndjson", swapped)];
      return [
        (await buildBaseline({ ...request, stream, from: a })).record.id,
        (await buildBaseline({ ...request, stream, from: b })).record.id,
      ];
    };
    expect(new Set(await ids("at")).size).toBe(1);
    expect(new Set(await ids("measured_at")).size).toBe(2);
  });

  it("counts every row by kind, and names the column, the source and the file's hash", async () => {
    const text =
      "at,cargo_temp,doors\n2026-01-01T00:00:00Z,1.5,0\n2026-01-01T00:00:06Z,NaN,NA\n2026-01-01T00:00:12Z,,inf\n2026-01-01T00:00:18Z,-2,-Infinity\n";
    const built = await buildBaseline({ ...request, from: writeFileOf("kinds.csv", text) });
    const manifest = manifestOfBuilt(built);
    expect(manifest.features).toEqual([
      {
        name: "cargo_temp",
        unit: "°C",
        column: "cargo_temp",
        events: 4,
        finite: 2,
        missing: 1,
        nonFinite: 1,
        min: -2,
        max: 1.5,
      },
      {
        name: "doors",
        unit: null,
        column: "doors",
        events: 4,
        finite: 1,
        missing: 1,
        nonFinite: 2,
        min: 0,
        max: 0,
      },
    ]);
    expect(manifest.source).toMatchObject({ kind: "files", files: 1, fileFormat: "csv" });
    expect(manifest.source).toHaveProperty("sha256", expect.stringMatching(/^[0-9a-f]{64}$/));
    expect([manifest.rows, built.record.note, built.record.createdBy]).toEqual([4, "first", "test"]);
  });

  it("freezes eleven thresholds a slice and feature, and counts at them exactly", async () => {
    const built = await buildBaseline({ ...request, from: writeNdjson("c.ndjson", ROWS) });
    const frozen = manifestOfBuilt(built).thresholds;
    expect(frozen.map(({ slice, feature, values }) => [slice, feature, values.length])).toEqual(
      ["all", "depot=south", "depot=north"].flatMap((slice) => [
        [slice, "cargo_temp", 11],
        [slice, "doors", 11],
      ]),
    );
    for (const { slice, values } of frozen.filter(({ feature }) => feature === "cargo_temp")) {
      const rows = slice === "all" ? ROWS : ROWS.filter(({ depot }) => `depot=${depot}` === slice);
      const side = sideOfPart(wholeOf(built, slice, "cargo_temp")!, built.record.id);
      const exact = numericSideOf(temps(rows));
      expect(side.thresholdCounts).toEqual({
        id: built.record.id,
        values,
        counts: values.map((value) => temps(rows).filter((temp) => temp <= value).length),
      });
      // Thresholds are read from a sketch of compression 500: the median within three thousandths of a rank, the 99th within one.
      expect(Math.abs(exact.cdf.values.findIndex((v) => v >= values[5]!) / exact.cdf.n - 0.5)).toBeLessThan(
        3e-3,
      );
      expect(Math.abs(temps(rows).filter((t) => t <= values[9]!).length / exact.cdf.n - 0.99)).toBeLessThan(
        1e-3,
      );
    }
  });

  it("is exact while the rows are few: quantiles are those of the rows", async () => {
    const rows = sampleRows(1_500);
    const built = await buildBaseline({ ...request, from: writeNdjson("few.ndjson", rows) });
    const exact = numericSideOf(temps(rows));
    const side = sideOfPart(wholeOf(built, "all", "cargo_temp")!, "id");
    expect(side.cdf.exact).toBe(true);
    for (const rank of [0, 0.01, 0.5, 0.95, 1]) {
      expect(quantileOf(side.cdf, rank)).toBe(quantileOf(exact.cdf, rank));
    }
  });

  it("keeps values that a hundredth of the rows or more have as atoms, and no others", async () => {
    const built = await buildBaseline({ ...request, from: writeNdjson("d.ndjson", ROWS) });
    const atoms = manifestOfBuilt(built).atoms.filter(({ slice }) => slice === "all");
    expect(atoms).toEqual([{ slice: "all", feature: "doors", values: [0, 1, 2, 3, 4] }]);
    const sketch = NumericSketch.decode(wholeOf(built, "all", "doors")!.body);
    const zeros = ROWS.filter(({ doors }) => doors === 0).length;
    expect(sketch.atoms().find(({ value }) => value === 0)?.count).toBe(zeros);
  });

  it("leaves slices out that have too few rows, and says so", async () => {
    const built = await buildBaseline({ ...request, from: writeNdjson("e.ndjson", ROWS) });
    const { slices, leftOutSlices } = manifestOfBuilt(built);
    expect(slices).toEqual([
      { slice: "all", rows: 20_000 },
      { slice: "depot=south", rows: 10_000 },
      { slice: "depot=north", rows: 9_960 },
    ]);
    expect(leftOutSlices).toEqual([{ slice: "depot=rare", rows: 40 }]);
    expect(wholeOf(built, "depot=rare", "doors")).toBe(undefined);
  });

  it("makes blocks by the event time that hold each row once, with counts at the same thresholds", async () => {
    const built = await buildBaseline({ ...request, from: writeNdjson("f.ndjson", ROWS) });
    const { blocks, thresholds } = manifestOfBuilt(built);
    // 20,000 rows six seconds apart are 33 h 20 min: 400 blocks as long as the shortest horizon.
    expect(blocks).toMatchObject({
      by: "time",
      count: 400,
      lengthMs: 300_000,
      sentence: "400 blocks of 5m by at",
    });
    const counts = blockCountsOf(built, "all", "doors");
    expect(counts).toMatchObject({ lengthMs: 300_000, startMs: ROWS[0]!.atMs });
    expect([...(counts.events as Float64Array)]).toEqual(Array(400).fill(50));
    const whole = sideOfPart(wholeOf(built, "all", "doors")!, "id").thresholdCounts!;
    const summed = counts.atOrBelow.map((hits) => (hits as Float64Array).reduce((a, b) => a + b, 0));
    expect(summed).toEqual(whole.counts);
    expect(whole.values).toEqual(thresholds.find((t) => t.slice === "all" && t.feature === "doors")!.values);
    // By hand, for one block: what lies at or below the median's threshold.
    const seventh = ROWS.slice(6 * 50, 7 * 50).filter(({ doors }) => doors <= whole.values[5]!).length;
    expect(counts.atOrBelow[5]![6]).toBe(seventh);
  });

  it("counts missing values in the blocks they fall in", async () => {
    const built = await buildBaseline({ ...request, from: writeNdjson("f2.ndjson", ROWS) });
    const { events, missing, finite } = blockCountsOf(built, "all", "cargo_temp");
    const missingIn = (block: number) =>
      ROWS.slice(block * 50, (block + 1) * 50).filter(({ temp }) => temp === null).length;
    expect([...(missing as Float64Array)]).toEqual(Array.from({ length: 400 }, (_, b) => missingIn(b)));
    for (let block = 0; block < 400; block += 1)
      expect(finite[block]! + missing[block]!).toBeLessThanOrEqual(events[block]!);
  });

  it("puts rows that are out of order into the blocks of their time", async () => {
    const shuffled = ROWS.map((row, i) => ({ row, key: (i * 7_919) % ROWS.length }))
      .sort((a, b) => a.key - b.key)
      .map(({ row }) => row);
    const built = await buildBaseline({ ...request, from: writeNdjson("g.ndjson", shuffled) });
    const inOrder = await buildBaseline({ ...request, from: writeNdjson("g2.ndjson", ROWS) });
    expect(blockCountsOf(built, "all", "doors")).toEqual(blockCountsOf(inOrder, "all", "doors"));
  });

  it("makes blocks by the order of the rows where no column tells the time", async () => {
    const built = await buildBaseline({
      ...request,
      stream: sampleStream("measured_at"),
      from: writeNdjson("h.ndjson", ROWS),
    });
    expect(manifestOfBuilt(built).blocks).toEqual({
      by: "rows",
      count: 40,
      lengthMs: null,
      rowsEach: 500,
      sentence: "40 blocks of 500 rows in the order of the file, for no column tells the time",
    });
  });

  it.each([
    ["seconds", 1_000],
    ["milliseconds", 1],
    ["nanoseconds", 1e-6],
  ])("reads a time column in %s", async (_, msPerUnit) => {
    const lines = ROWS.map(({ atMs, temp, doors }) => `${atMs / msPerUnit},${temp ?? ""},${doors}`);
    const from = writeFileOf("times.csv", `stamp,cargo_temp,doors\n${lines.join("\n")}\n`);
    const built = await buildBaseline({ ...request, from, timeColumn: "stamp" });
    expect(manifestOfBuilt(built).blocks).toMatchObject({ by: "time", count: 400, lengthMs: 300_000 });
  });

  it("reads several files by a pattern as one, in the order of their names", async () => {
    writeSeparated("part-1.csv", ROWS.slice(0, 9_000), ",");
    writeSeparated("part-2.csv", ROWS.slice(9_000), ",");
    const whole = await buildBaseline({ ...request, from: writeSeparated("one.csv", ROWS, ",") });
    const parts = await buildBaseline({ ...request, from: `${folder}/part-*.csv` });
    expect(parts.record.id).toBe(whole.record.id);
    expect(manifestOfBuilt(parts).source).toMatchObject({ files: 2 });
  });

  it("tells how far it is", async () => {
    const seen: ReadProgress[] = [];
    await buildBaseline({ ...request, from: writeNdjson("p.ndjson", ROWS), onProgress: (p) => seen.push(p) });
    const last = seen.filter(({ stage }) => stage === "counting").at(-1);
    expect(last).toEqual({ stage: "counting", rows: 20_000, totalRows: 20_000, done: 1 });
  });

  const refused: readonly (readonly [string, string, string, RegExp])[] = [
    ["no file", "nowhere/*.csv", "", /no file matches nowhere/],
    ["a folder", folder, "", /it is a folder/],
    ["a remote address", "s3://bucket/train.parquet", "", /remote address/],
    ["an unknown ending", "train.xlsx", "x", /no known format/],
    [
      "no column of a feature",
      "no-doors.csv",
      "at,cargo_temp\n2026-01-01,1\n",
      /no column for doors; its columns are at, cargo_temp/,
    ],
    [
      "text among the numbers",
      "text.csv",
      "cargo_temp,doors\n1,0\nwarm,1\ncold,1\n",
      /column cargo_temp of .* is no number in 2 of its values, such as "warm"/,
    ],
    ["a feature without a value", "empty.csv", "cargo_temp,doors\n1,\n2,\n", /no value of doors/],
    ["no row", "none.csv", "cargo_temp,doors\n", /no value of cargo_temp, doors/],
    [
      "broken JSON",
      "broken.ndjson",
      '{"cargo":{"temp":1},"doors":1}\n{"cargo":{"temp":\n',
      /cannot be read: .*[Mm]alformed JSON/,
    ],
    ["no Parquet", "fake.parquet", "not parquet at all", /cannot be read/],
  ];
  it.each(refused)("refuses %s in one sentence", async (_, name, text, message) => {
    const from = text === "" ? name : writeFileOf(name, text);
    await expect(buildBaseline({ ...request, from })).rejects.toThrow(message);
  });

  it("refuses a time column that is not there", async () => {
    const from = writeNdjson("q.ndjson", sampleRows(10));
    await expect(buildBaseline({ ...request, from, timeColumn: "whenn" })).rejects.toThrow(
      /no column for whenn/,
    );
  });
});
