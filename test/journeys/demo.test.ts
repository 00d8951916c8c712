import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { openStore } from "@moorline/store";
import { afterAll, describe, expect, it } from "vitest";
import { CliChild, freePort, runCli } from "../real-parts/index.js";

// The demo as anyone starts it: built command, own folder, own port. Two minutes of the clock, for that is how long the drift may take.

const folder = mkdtempSync(join(tmpdir(), "moorline-demo-"));
const config = join(folder, ".moorline/demo/moorline.yaml");
const children: CliChild[] = [];
afterAll(async () => {
  for (const child of children) await child.end("SIGKILL");
  rmSync(folder, { recursive: true, force: true });
});

function startDemo(port: number): CliChild {
  const child = new CliChild(["run", "--demo"], {
    cwd: folder,
    env: { MOORLINE_GATEWAY_PORT: String(port) },
  });
  children.push(child);
  return child;
}

const match = (pattern: RegExp) => (child: CliChild) => pattern.exec(child.out);
const streaming = (child: CliChild) =>
  child.until("streaming", 60_000, match(/Feed {6}(starts|goes on) at (\S+ \S+) event time/));
const ADRIFT = /cargo_temp \(depot=north, 5m\) is adrift: upper tail heavier: .*/;

interface CountedOnce {
  readonly clean: boolean;
  readonly streams: readonly {
    readonly events: number;
    readonly deadLetters: number;
    readonly partitions: number;
  }[];
}

async function audit(): Promise<CountedOnce> {
  const { status, out, err } = await runCli(["audit", "--format", "json", "--config", config], {
    cwd: folder,
  });
  expect([status, err]).toEqual([0, ""]);
  return JSON.parse(out) as CountedOnce;
}

describe("moorline run --demo", () => {
  const seen = { events: 0, baseline: "", next: "" };

  it("goes adrift in the upper tail of cargo_temp within two minutes, with every other feature holding, and answers", async () => {
    const port = await freePort();
    const child = startDemo(port);
    await streaming(child);
    const startedMs = performance.now();
    seen.baseline = (
      await child.until("baseline", 1_000, match(/Baseline {2}(\w{12}) made and activated/))
    )[1]!;
    expect(child.out).toContain("All of this data is invented.");

    const [sentence] = await child.until("adrift", 120_000, match(ADRIFT));
    const seconds = (performance.now() - startedMs) / 1_000;
    expect(seconds).toBeLessThan(120);
    expect(sentence).toMatch(/% of values lie above the baseline's p\d/);
    await child.until("what to try", 5_000, match(/What to try next/));

    const others = child.out.split("\n").filter((line) => / is (straining|adrift|thin|silent): /.test(line));
    expect(others.filter((line) => !line.includes("cargo_temp ("))).toEqual([]);
    expect(others.filter((line) => /depot=(south|east)/.test(line))).toEqual([]);

    for (const url of child.out
      .match(/http:\/\/localhost:\d+\S*/g)!
      .map((found) => found.replace(/'$/, ""))) {
      const response = await fetch(url);
      expect([url, response.status]).toEqual([url, 200]);
      await response.arrayBuffer();
    }
    const metrics = await (await fetch(`http://localhost:${port}/metrics`)).text();
    const state =
      /^moorline_feature_state\{(?=.*feature="cargo_temp")(?=.*slice="depot=north")(?=.*horizon="5m")(?=.*state="adrift").*\} 1$/m;
    expect(metrics).toMatch(state);

    const stopMs = performance.now();
    expect(await child.end("SIGINT")).toBe(0);
    expect(performance.now() - stopMs).toBeLessThan(10_000);
    const last =
      /Stopped: ([\d,]+) events are counted, everything is written\. The next start goes on from (\S+ \S+) event time\.\n$/;
    const [, events, next] = last.exec(child.out)!;
    Object.assign(seen, { events: Number(events!.replaceAll(",", "")), next });
    expect(child.err).toBe("");
    const { clean, streams } = await audit();
    expect(clean).toBe(true);
    expect(streams).toMatchObject([{ events: seen.events, deadLetters: 0, partitions: 3 }]);
  });

  it("goes on where it stopped: same baseline, event time and counts continue, audit clean", async () => {
    const child = startDemo(await freePort());
    const [, how, from] = await streaming(child);
    expect([how, from]).toEqual(["goes on", seen.next]);
    expect(child.out).toContain(`Baseline  ${seen.baseline} is set from the last time.`);
    await child.until("where the drift stands", 5_000, match(/The compressors of depot north are tired/));
    await new Promise((resolve) => setTimeout(resolve, 8_000));
    expect(await child.end("SIGTERM")).toBe(0);
    expect(child.err).toBe("");

    const { clean, streams } = await audit();
    expect(clean).toBe(true);
    // Eight seconds are 1,200 events; what the first run wrote last may have been counted by the second.
    expect(streams[0]!.events).toBeGreaterThan(seen.events + 600);
    const store = await openStore({ kind: "sqlite", path: join(folder, ".moorline/demo/moorline.db") });
    const rollups = await store.panes.rollups({
      stream: "chill-risk",
      level: "pane",
      fromMs: 0,
      toMs: Number.MAX_SAFE_INTEGER,
      slice: "all",
      feature: "cargo_temp",
    });
    await store.close();
    // Event i stands 400 ms after event i − 1: a whole pane has 150, whichever start counted it.
    expect(rollups.slice(1, -1).map(({ events }) => events)).toEqual(Array(rollups.length - 2).fill(150));
  });

  it("says that its port is taken before it does anything else", async () => {
    const port = String(await freePort());
    const first = startDemo(Number(port));
    await streaming(first);
    const second = await runCli(["run", "--demo"], {
      cwd: folder,
      env: { MOORLINE_GATEWAY_PORT: port, MOORLINE_DEMO_DIR: join(folder, "other") },
    });
    expect(second).toEqual({
      status: 3,
      out: "",
      err: `moorline: port ${port} on 127.0.0.1 is taken by another program; stop that program, or take another port: MOORLINE_GATEWAY_PORT=7470\n`,
    });
    expect(await first.end("SIGINT")).toBe(0);
  });
});
