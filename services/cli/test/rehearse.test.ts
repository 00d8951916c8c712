import type { RehearsalAnswer } from "@moorline/answers";
import { openStore } from "@moorline/store";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { moorline, TestFolder } from "./capture-io.js";
import { DRIFT_FROM, DRIFT_MINUTES, STORED_FROM, STORED_MINUTES, storedDays } from "./stored-days.js";

const folder = new TestFolder();
afterAll(() => folder.remove());
let config: string[] = [];
beforeAll(async () => {
  config = await storedDays(folder);
});

const MINUTE = 60_000;
const rehearse = async (...options: string[]) => {
  const ran = await moorline(["rehearse", ...options, "--format", "json", ...config]);
  expect(ran).toMatchObject({ err: "", status: 0 });
  return JSON.parse(ran.out) as RehearsalAnswer;
};
const minuteOf = (iso: string) => (Date.parse(iso) - STORED_FROM) / MINUTE;

describe("moorline rehearse", () => {
  it("tells what would have paged, when and for how long, and of nothing else", async () => {
    const answer = await rehearse();
    const shortest = answer.pages.filter(({ horizon }) => horizon === "5m");
    expect(shortest.map(({ feature, slice }) => [feature, slice])).toEqual([
      ["x", "all"],
      ["x", "depot=north"],
    ]);
    for (const page of shortest) {
      // Three windows of five minutes lie in the drift when it pages; it is over some windows after the drift is.
      expect(minuteOf(page.from)).toBeGreaterThanOrEqual(DRIFT_FROM + 5);
      expect(minuteOf(page.from)).toBeLessThanOrEqual(DRIFT_FROM + 20);
      expect(minuteOf(page.to!)).toBeGreaterThan(DRIFT_FROM + DRIFT_MINUTES);
      expect(minuteOf(page.to!)).toBeLessThanOrEqual(DRIFT_FROM + DRIFT_MINUTES + 240);
      expect(page.minutes).toBe(minuteOf(page.to!) - minuteOf(page.from));
      expect(page.reading).toMatch(/^upper tail heavier: /);
    }
    expect(answer.pages.every(({ feature }) => feature === "x")).toBe(true);
    // Two features and two slices: 288 windows of five minutes and 24 hours each.
    expect(answer.windows).toBe(4 * (288 + 24));
    expect(answer.configuredPages).toEqual(answer.pages);
  });

  it("tries other tolerances beside those of the config", async () => {
    const file = folder.write("deaf.yaml", "tailFactor: 500\nbodyFloor: 0.9\n");
    const answer = await rehearse("--tolerances", file);
    expect(answer.pages).toEqual([]);
    expect(answer.configuredPages.length).toBeGreaterThan(0);
    expect(answer.tolerances.tried).toEqual({
      persistence: 3,
      releaseAfter: 3,
      bodyFloor: 0.9,
      tailFactor: 500,
    });
  });

  it("writes nothing", async () => {
    const read = async () => {
      const store = await openStore({ kind: "sqlite", path: folder.at("s.db") });
      const [logbook, states] = [
        await store.logbook.entries({ limit: 100 }),
        await store.evaluations.states("s"),
      ];
      await store.close();
      return { entries: logbook.length, states };
    };
    const before = await read();
    await rehearse();
    expect(await read()).toEqual(before);
  });

  it("keeps to the range, and says of a page that lasted to its end that it still does", async () => {
    const from = new Date(STORED_FROM + DRIFT_FROM * MINUTE).toISOString();
    const to = new Date(STORED_FROM + (DRIFT_FROM + 60) * MINUTE).toISOString();
    const answer = await rehearse("--from", from, "--to", to, "--feature", "x");
    expect(answer.windows).toBe(2 * (12 + 1));
    expect(answer.pages.find(({ horizon, slice }) => horizon === "5m" && slice === "all")).toMatchObject({
      to: null,
    });
    const table = await moorline(["rehearse", "--from", from, "--to", to, "--feature", "x", ...config]);
    expect(table.out).toContain("still");
    expect(table.out).toContain("Nothing was written or sent.");
  });

  it.each([
    [
      "a key that is not known",
      "tailfactor: 3\n",
      /tailfactor: is not a known key: did you mean tailFactor\?/,
    ],
    ["a value out of range", "tailFactor: 0.5\n", /tailFactor: /],
    ["what is no YAML", "a: [\n", /is not YAML/],
  ])("names %s in a tolerances file with its line", async (_, text, says) => {
    const file = folder.write("broken.yaml", text);
    const ran = await moorline(["rehearse", "--tolerances", file, ...config]);
    expect(ran.status).toBe(2);
    expect(ran.err).toMatch(says);
    expect(ran.err).toMatch(/broken\.yaml:\d+:\d+ /);
  });

  it.each([
    [["--tolerances", "nowhere.yaml"], /there is no such file/],
    [["--from", "last", "--to", "first"], /--from/],
    [["--feature", "z"], /z/],
  ])("refuses %j in one sentence", async (options, says) => {
    const ran = await moorline(["rehearse", ...options, ...config]);
    expect(ran.status).toBe(2);
    expect(ran.err).toMatch(says);
    expect(ran.err).not.toMatch(/at .*\.ts/);
  });

  it("covers the whole of what is stored by default", async () => {
    const { range } = await rehearse("--feature", "y");
    expect([minuteOf(range.from), minuteOf(range.to)]).toEqual([0, STORED_MINUTES]);
  });
});
