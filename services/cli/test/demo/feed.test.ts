import { appendFileSync, readFileSync } from "node:fs";
import { setTimeout as sleep } from "node:timers/promises";
import { afterEach, describe, expect, it } from "vitest";
import { type DemoFolder, openDemoFolder } from "../../src/demo/demo-folder.js";
import { FeedWriter, feedLine, tirednessAt } from "../../src/demo/feed-writer.js";
import { DEPOTS, type ParcelEvent, Parcels } from "../../src/demo/parcel-event.js";
import { TestFolder } from "../capture-io.js";

const folders: TestFolder[] = [];
afterEach(() => {
  for (const folder of folders.splice(0)) folder.remove();
});

function demoFolder(): DemoFolder {
  const folder = new TestFolder();
  folders.push(folder);
  return openDemoFolder({ MOORLINE_DEMO_DIR: folder.at("demo") });
}

const NOW = Date.UTC(2026, 5, 1, 10, 0, 30);
const ORIGIN = Date.UTC(2026, 5, 1, 10, 0);

const linesOf = (folder: DemoFolder) =>
  folder.feed.map((path) => readFileSync(path, "utf8").split("\n").slice(0, -1));
const timesOf = (lines: readonly string[]) =>
  lines.map((line) => Date.parse((JSON.parse(line) as { measured_at: string }).measured_at));

async function writeFor(writer: FeedWriter, ms: number): Promise<void> {
  writer.start((error) => {
    throw error;
  });
  await sleep(ms);
  writer.stop();
}

describe("Parcels", () => {
  const events = (tiredness: number, seed = 1) => {
    const parcels = new Parcels(seed);
    return Array.from({ length: 30_000 }, (_, i) => parcels.event(i, tiredness));
  };
  const warmShare = (list: readonly ParcelEvent[], depot: string) => {
    const there = list.filter((event) => event.depot === depot);
    return there.filter(({ cargo_temp }) => cargo_temp > 7.25).length / there.length;
  };

  it("gives the same event for the same seed and index, in whatever order", () => {
    const [a, b] = [new Parcels(1), new Parcels(1)];
    b.event(5_000, 0);
    expect(a.event(77, 0)).toEqual(b.event(77, 0));
    expect(a.event(77, 0)).not.toEqual(new Parcels(2).event(77, 0));
  });

  it("spreads each feature evenly: every 300 events of a depot have the same share of warm parcels", () => {
    const north = events(0).filter(({ depot }) => depot === "north");
    for (let from = 0; from + 300 <= north.length; from += 300) {
      const warm = north.slice(from, from + 300).filter(({ cargo_temp }) => cargo_temp > 7.25).length;
      expect(Math.abs(warm - 3)).toBeLessThanOrEqual(1);
    }
  });

  it("warms the parcels of one depot several times more often when its compressors are tired, and changes nothing else", () => {
    const [rested, tired] = [events(0), events(1)];
    expect(warmShare(rested, "north")).toBeLessThan(0.012);
    expect(warmShare(tired, "north")).toBeGreaterThan(0.08);
    for (const depot of DEPOTS.filter((name) => name !== "north")) {
      expect(warmShare(tired, depot)).toBe(warmShare(rested, depot));
    }
    const other = ({ cargo_temp: _, ...rest }: ParcelEvent) => rest;
    expect(tired.map(other)).toEqual(rested.map(other));
  });
});

describe("tirednessAt", () => {
  it("is 0 for 40 event minutes, then grows to 1", () => {
    expect([0, 40, 44, 48, 1_000].map(tirednessAt)).toEqual([0, 0, 0.5, 1, 1]);
  });
});

describe("FeedWriter", () => {
  it("writes an event minute each second into every file, each in the order of time", async () => {
    const folder = demoFolder();
    const writer = new FeedWriter(folder, NOW);
    expect([writer.resumed, writer.nextMs]).toEqual([false, ORIGIN]);
    await writeFor(writer, 1_100);
    const lines = linesOf(folder);
    const times = lines.flatMap(timesOf).sort((a, b) => a - b);
    expect(times).toEqual(times.map((_, i) => ORIGIN + i * 400));
    // 1.1 s are 66 event seconds, 165 events; ticks are 200 ms apart.
    expect(times.length).toBeGreaterThanOrEqual(100);
    expect(times.length).toBeLessThanOrEqual(200);
    for (const part of lines) expect(timesOf(part)).toEqual(timesOf(part).toSorted((a, b) => a - b));
    expect(Math.min(...lines.map((part) => part.length))).toBeGreaterThan(20);
  });

  it("goes on after the last event, and takes off a line that a kill has cut", async () => {
    const folder = demoFolder();
    await writeFor(new FeedWriter(folder, NOW), 500);
    const before = linesOf(folder);
    const count = before.flat().length;
    appendFileSync(folder.feed[1]!, feedLine(new Parcels(1), count, ORIGIN).slice(0, 30));
    const second = new FeedWriter(folder, NOW + 86_400_000);
    expect([second.resumed, second.nextMs]).toEqual([true, ORIGIN + count * 400]);
    await writeFor(second, 500);
    const times = linesOf(folder)
      .flatMap(timesOf)
      .sort((a, b) => a - b);
    expect(times.length).toBeGreaterThan(count);
    expect(times).toEqual(times.map((_, i) => ORIGIN + i * 400));
  });
});
