import type { PairsAnswer } from "@moorline/answers";
import { NumericSketch } from "@moorline/sketch";
import { numericSideOf, quantileOf } from "@moorline/stats";
import { openStore, type RollupRow } from "@moorline/store";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { SeededRandom } from "../src/demo/random.js";
import { moorline, TestFolder } from "./capture-io.js";

const folder = new TestFolder();
afterAll(() => folder.remove());

const MINUTE = 60_000;
const START = Date.UTC(2026, 0, 1, 10);
const PANES = 120;

const CONFIG = `store: sqlite:./s.db
streams:
  - name: s
    source: { file: { paths: [f.ndjson] } }
    payload: { eventTime: at }
    slices: [depot]
    features: [ { name: x, unit: °C }, { name: y } ]
`;

/** Ten values a pane; in the second hour they lie two higher. */
function paneValues(pane: number): number[] {
  return Array.from(
    { length: 10 },
    (_, i) => new SeededRandom(3, pane * 10 + i).uniform() + (pane >= 60 ? 2 : 0),
  );
}

const hour = (index: 0 | 1) => Array.from({ length: 60 }, (_, i) => paneValues(60 * index + i)).flat();

let config: string[] = [];
beforeAll(async () => {
  config = ["--config", folder.write("moorline.yaml", CONFIG)];
  const store = await openStore({ kind: "sqlite", path: folder.at("s.db") });
  const rollups = Array.from({ length: PANES }, (_, pane): RollupRow => {
    const sketch = new NumericSketch();
    for (const value of paneValues(pane)) sketch.add(value);
    const startMs = START + pane * MINUTE;
    return {
      level: "pane",
      startMs,
      slice: "all",
      feature: "x",
      events: 10,
      amended: pane === 70,
      body: sketch.encode(),
    };
  });
  const lease = await store.evaluations.acquireLease("test", "me", START, MINUTE);
  const progress = { watermarkMs: START, closedThroughMs: 0, evaluatedAtMs: START };
  const batch = {
    stream: "s",
    lease: lease!,
    progress,
    settledSegments: [],
    evaluations: [],
    states: [],
    logbook: [],
  };
  await store.evaluations.commit({ ...batch, rollups });
  await store.close();
  const rows = hour(0).map((x, i) => `${x},${i}`);
  const training = folder.write("train.csv", `x,y\n${rows.join("\n")}\n`);
  const set = await moorline(["baseline", "set", "--from", training, "--activate", ...config]);
  expect(set.err).toBe("");
});

async function pairs(...args: string[]): Promise<PairsAnswer> {
  const { status, out, err } = await moorline(["pairs", "--feature", "x", ...args, ...config]);
  expect([status, err]).toEqual([0, ""]);
  return JSON.parse(out) as PairsAnswer;
}

describe("moorline pairs", () => {
  it("gives the quantile pairs of a range against the active baseline, as brute force does, with what they are of", async () => {
    const answer = await pairs("--from", "last-1h", "--to", "last");
    const [before, now] = [numericSideOf(hour(0)).cdf, numericSideOf(hour(1)).cdf];
    const known = answer.pairs.filter((pair) => pair.beyondData !== true);
    expect(known).toHaveLength(27);
    for (const { rank, baseline, production } of known) {
      expect(baseline).toBeCloseTo(quantileOf(before, rank), 12);
      expect(production).toBeCloseTo(quantileOf(now, rank), 12);
    }
    expect(answer).toMatchObject({
      feature: "x",
      stream: "s",
      unit: "°C",
      slice: "all",
      state: "adrift",
      n: { baseline: 600, production: 600 },
      window: { from: "2026-01-01T11:00:00.000Z", to: "2026-01-01T12:00:00.000Z" },
      baseline: { id: expect.stringMatching(/^[0-9a-f]{64}$/), slice: "all" },
      against: null,
      amended: true,
      generatedAt: "2026-06-01T00:00:00.000Z",
    });
  });

  it("holds one range against another, widened to whole panes", async () => {
    const range = ["--from", "2026-01-01T10:30", "--to", "2026-01-01T10:59:30Z"];
    const answer = await pairs(...range, "--against", "first..first+30m");
    expect(answer).toMatchObject({
      state: "holding",
      n: { baseline: 300, production: 300 },
      window: { from: "2026-01-01T10:30:00.000Z", to: "2026-01-01T11:00:00.000Z" },
      baseline: null,
      against: { from: "2026-01-01T10:00:00.000Z", to: "2026-01-01T10:30:00.000Z" },
      amended: false,
    });
  });

  it("prints CSV with empty cells where a side has no value that far out, and a figure", async () => {
    const csv = await moorline(["pairs", "--feature", "x", "--format", "csv", ...config]);
    const lines = csv.out.trimEnd().split("\n");
    expect(lines[0]).toBe("rank,baseline,production,low,high");
    expect(lines).toHaveLength(30);
    expect(lines[1]).toMatch(/^0\.001,,,/);
    const svg = await moorline(["pairs", "--feature", "x", "--format", "svg", ...config]);
    expect(svg.out).toMatch(/^<\?xml.*\n<svg /);
    expect(svg.out).toContain("s, all, 2026-01-01T11:00Z to 2026-01-01T12:00Z, n = 600; against baseline ");
  });

  it("says thin, and that there is no value, for a range or slice without events", async () => {
    const { status, out, err } = await moorline([
      "pairs",
      "--feature",
      "x",
      "--slice",
      "depot=north",
      ...config,
    ]);
    expect([status, err]).toEqual([0, "no value of x (depot=north) in this range\n"]);
    expect(JSON.parse(out)).toMatchObject({ state: "thin", ks: null, pairs: [], n: { production: 0 } });
  });

  const refused: readonly (readonly [string[], RegExp])[] = [
    [["--feature", "z"], /stream s has no feature z; it has x, y/],
    [["--feature", "x", "--from", "soon"], /--from is "soon", which is not a time such as/],
    [["--feature", "x", "--from", "last", "--to", "first"], /--from is last, which is not before --to/],
    [["--feature", "x", "--against", "first"], /--against is "first", which is not a range FROM\.\.TO/],
    [["--feature", "x", "--baseline", "ffff"], /there is no baseline ffff/],
    [
      ["--feature", "x", "--baseline", "ffff", "--against", "first..last"],
      /exactly one of --against and --baseline/,
    ],
    [["--feature", "x", "--format", "png"], /--format is "png", which is not one of json, csv, svg/],
  ];
  it.each(refused)("refuses %j with 2 and one sentence", async (args, message) => {
    const { status, out, err } = await moorline(["pairs", ...args, ...config]);
    expect([status, out]).toEqual([2, ""]);
    expect(err).toMatch(message);
    expect(err.trimEnd().split("\n")).toHaveLength(1);
  });
});

describe("moorline rules", () => {
  it("prints alert rules for the config's stream", async () => {
    const { status, out, err } = await moorline(["rules", ...config]);
    expect([status, err]).toEqual([0, ""]);
    for (const alert of [
      "FeatureAdrift",
      "FeedSilent",
      "CollectorBehind",
      "EvaluationStale",
      "DeadLetters",
    ]) {
      expect(out).toMatch(new RegExp(`alert: "?${alert}"?`));
    }
  });
});
