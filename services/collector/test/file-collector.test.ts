import { readFile, truncate, writeFile } from "node:fs/promises";
import { setTimeout as sleep } from "node:timers/promises";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { CollectorBench, parcel, parcels, until } from "./collected.js";

const NOW_MS = Date.UTC(2026, 11, 1, 10, 0, 0);
const nowMs = () => NOW_MS;

let bench: CollectorBench;
beforeEach(async () => {
  bench = await CollectorBench.open();
});
afterEach(async () => {
  await bench.close();
});

describe("a collector on finished files", () => {
  it("startCollector() counts every event of every file once, by slice, and ends", async () => {
    const a = await bench.write("a.ndjson", parcels(0, 3000));
    const b = await bench.write("b.ndjson", parcels(0, 1000));
    await bench.readToEnd(bench.config(bench.fileStream([a, b])));

    const all = await bench.kinds("all", "cargo_temp");
    expect(all).toMatchObject({ events: 4000, finite: 4000, missing: 0 });
    expect((await bench.kinds("depot=north", "cargo_temp"))?.events).toBe(2000);
    expect((await bench.kinds("depot=south", "door_openings"))?.events).toBe(2000);
    const sum = parcels(0, 3000)
      .concat(parcels(0, 1000))
      .reduce((s, line) => s + JSON.parse(line).cargo.temp, 0);
    expect((await bench.counted()).get("all")?.get("cargo_temp")?.sum).toBe(sum);
    expect((await bench.store.audit()).clean).toBe(true);
    expect((await bench.store.ingest.partitions("chill-risk")).map((row) => row.status)).toEqual([
      "finished",
      "finished",
    ]);
  });

  it("startCollector() goes on where the last one stopped when a file has grown", async () => {
    const path = await bench.write("a.ndjson", parcels(0, 700));
    const config = bench.config(bench.fileStream([path]));
    await bench.readToEnd(config);
    await bench.append("a.ndjson", parcels(700, 1000));
    await bench.readToEnd(config);
    await bench.readToEnd(config);

    expect((await bench.kinds("all", "cargo_temp"))?.events).toBe(1000);
    expect((await bench.store.audit()).clean).toBe(true);
  });

  it("startCollector() counts missing and non-finite values by kind", async () => {
    const time = '"measured_at":"2026-12-01T09:00:00Z"';
    const path = await bench.write("a.ndjson", [
      `{${time},"cargo":{"temp":1e999},"door_openings":1}`,
      `{${time},"cargo":{"temp":-1e999},"door_openings":2}`,
      `{${time},"cargo":null,"door_openings":3}`,
      `{${time}}`,
    ]);
    await bench.readToEnd(bench.config(bench.fileStream([path])));

    expect(await bench.kinds("all", "cargo_temp")).toEqual({
      events: 4,
      finite: 0,
      missing: 2,
      nan: 0,
      positiveInfinity: 1,
      negativeInfinity: 1,
    });
    expect((await bench.kinds("depot=(none)", "door_openings"))?.missing).toBe(1);
  });

  it("startCollector() counts slice values beyond the limit under other, and says so", async () => {
    const lines = Array.from({ length: 500 }, (_, i) => parcel(i, { depot: `d${i % 100}` }));
    const path = await bench.write("a.ndjson", lines);
    const { telemetry } = await bench.readToEnd(bench.config(bench.fileStream([path], { sliceLimit: 10 })));

    const slices = [...(await bench.counted()).keys()].sort();
    expect(slices).toHaveLength(12);
    expect((await bench.kinds("depot=other", "cargo_temp"))?.events).toBe(450);
    expect((await bench.kinds("depot=d9", "cargo_temp"))?.events).toBe(5);
    expect(await telemetry.registry.metrics()).toContain(
      'moorline_slice_overflow_total{stream="chill-risk",key="depot"} 1',
    );
  });

  it("startCollector() counts late events into their pane, and as late beside that", async () => {
    const lines = [parcel(600), parcel(361), parcel(359), parcel(0), parcel(601)];
    const path = await bench.write("a.ndjson", lines);
    await bench.readToEnd(bench.config(bench.fileStream([path])));

    const [row] = await bench.store.ingest.partitions("chill-risk");
    // 361 s lies in the pane that ended at 420 s: 600 - 420 is past the lateness of 120 s, as are 359 s and 0 s.
    expect(row).toMatchObject({ events: 5, lateEvents: 3, maxEventMs: Date.parse("2026-12-01T09:10:01Z") });
    expect((await bench.store.panes.pendingPanes("chill-risk")).length).toBe(4);
  });

  it("startCollector() raises the metrics when a checkpoint is written", async () => {
    const path = await bench.write("a.ndjson", [...parcels(0, 100), "no event"]);
    const { telemetry } = await bench.readToEnd(bench.config(bench.fileStream([path])));

    const text = await telemetry.registry.metrics();
    expect(text).toContain('moorline_events_total{stream="chill-risk",outcome="counted"} 100');
    expect(text).toContain('moorline_events_total{stream="chill-risk",outcome="dead-lettered"} 1');
    expect(text).toContain('moorline_dead_letters_total{stream="chill-risk",reason="invalid-json"} 1');
    expect(text).toMatch(/moorline_checkpoint_duration_seconds_count\{stream="chill-risk"\} [1-9]/);
  });

  it("startCollector() keeps sketches within their bytes by writing sooner, without losing an event", async () => {
    const path = await bench.write("a.ndjson", parcels(0, 5000));
    const { log } = await bench.readToEnd(
      bench.config(bench.fileStream([path]), { checkpointMs: 60_000, checkpointBytes: 20_000 }),
    );

    const written = log.filter((line) => line.includes("checkpoint written")).length;
    expect(written).toBeGreaterThanOrEqual(4);
    expect(await bench.eventsCounted()).toBe(5000);
  });

  it("startCollector() names a stream that the config does not have", async () => {
    const config = bench.config(bench.fileStream([]));
    const { startCollector } = await import("../src/index.js");
    const { createTelemetry } = await import("@moorline/telemetry");
    const telemetry = createTelemetry({ service: "collector", logLevel: "silent" });
    await expect(
      startCollector({ config, store: bench.store, telemetry, streams: ["nope"] }),
    ).rejects.toMatchObject({
      code: "MOORLINE_INPUT_COLLECTOR_STREAM",
      message: "there is no stream nope in the config, which has chill-risk",
    });
  });

  it("ended rejects when a finished file cannot be read, naming it", async () => {
    const { service } = await bench.start(bench.config(bench.fileStream([bench.path("absent.ndjson")])));
    await expect(service.ended).rejects.toMatchObject({ code: "MOORLINE_UPSTREAM_FILE_SOURCE" });
    await service.stop();
  });
});

describe("a collector on growing files", () => {
  it("startCollector() takes lines as they come, a partial one when it is whole, and stops with a last checkpoint", async () => {
    const path = await bench.write("a.ndjson", parcels(0, 10));
    const { service } = await bench.start(bench.config(bench.fileStream([path], { follow: true })));
    await until("10 events", async () => (await bench.eventsCounted()) === 10);

    const last = parcel(10);
    await writeFile(path, last.slice(0, 20), { flag: "a" });
    await sleep(600);
    expect(await bench.eventsCounted()).toBe(10);
    await writeFile(path, `${last.slice(20)}\n${parcel(11)}\n`, { flag: "a" });
    await sleep(300);
    await service.stop();

    expect(await bench.eventsCounted()).toBe(12);
    expect((await bench.store.ingest.partitions("chill-risk"))[0]?.deadLetters).toBe(0);
  });

  it("startCollector() waits for a file that is not there yet, not ready meanwhile", async () => {
    const path = bench.path("later.ndjson");
    const { service, telemetry } = await bench.start(
      bench.config(bench.fileStream([path], { follow: true })),
    );
    await until("not ready", () =>
      telemetry.health.problems().some((p) => p.reason.includes("later.ndjson")),
    );
    await bench.write("later.ndjson", parcels(0, 5));
    await until("5 events", async () => (await bench.eventsCounted()) === 5);

    expect(telemetry.health.problems()).toEqual([]);
    await service.stop();
  });

  it.each([
    ["cut short", async (path: string) => truncate(path, 100)],
    ["written anew, longer", async (path: string) => writeFile(path, `${parcels(50, 2000).join("\n")}\n`)],
  ])("startCollector() halts loudly on a file that was %s, and stays halted", async (_, damage) => {
    const path = await bench.write("a.ndjson", parcels(0, 1000));
    const config = bench.config(bench.fileStream([path], { follow: true }));
    const first = await bench.start(config);
    await until("1000 events", async () => (await bench.eventsCounted()) === 1000);
    await first.service.stop();
    await damage(path);

    for (let start = 0; start < 2; start++) {
      const { service, telemetry } = await bench.start(config);
      await until("halted", () => telemetry.health.problems().some((p) => p.name.includes("a.ndjson")));
      await service.stop();
    }
    const [row] = await bench.store.ingest.partitions("chill-risk");
    expect(row).toMatchObject({ status: "log-rewound", events: 1000 });
    const entries = await bench.store.logbook.entries({ stream: "chill-risk", limit: 10 });
    expect(
      entries.filter((entry) => entry.sentence.includes("rewound") || entry.kind === "log-rewound"),
    ).toHaveLength(1);
  });

  it("two collectors on one file: the older epoch writes nothing, and every event counts once", async () => {
    const path = await bench.write("a.ndjson", parcels(0, 500));
    const config = bench.config(bench.fileStream([path], { follow: true }));
    const first = await bench.start(config, { instance: "first" });
    await until("500 events", async () => (await bench.eventsCounted()) === 500);
    const second = await bench.start(config, { instance: "second" });
    await until("a second epoch", async () => {
      const [row] = await bench.store.ingest.partitions("chill-risk");
      return row?.owner === "second";
    });
    for (let i = 0; i < 20; i++) {
      await bench.append("a.ndjson", parcels(500 + i * 100, 600 + i * 100));
      await sleep(50);
    }
    await until("2500 events", async () => (await bench.eventsCounted()) >= 2500);
    await Promise.all([first.service.stop(), second.service.stop()]);

    expect(await bench.eventsCounted()).toBe(2500);
    expect((await bench.kinds("all", "cargo_temp"))?.events).toBe(2500);
    expect((await bench.store.audit()).clean).toBe(true);
    const fenced = (await first.telemetry.registry.metrics()).match(
      /moorline_collector_fenced_total\{[^}]*\} (\d+)/,
    );
    expect(Number(fenced?.[1])).toBeGreaterThanOrEqual(1);
  });
});

describe("dead letters of files", () => {
  it("startCollector() keeps each refused line with its reason, place and bytes", async () => {
    const lines = [parcel(1), "not json", parcel(2)];
    const path = await bench.write("a.ndjson", lines);
    await bench.readToEnd(bench.config(bench.fileStream([path])), { nowMs });

    const letters = (await readFile(bench.path("dead-letters.ndjson"), "utf8"))
      .trim()
      .split("\n")
      .map((l) => JSON.parse(l));
    expect(letters).toEqual([
      {
        stream: "chill-risk",
        topic: path,
        partition: 0,
        offset: Buffer.byteLength(lines[0]!) + 1,
        reason: "invalid-json",
        detail: expect.stringContaining("JSON"),
        payloadBytes: 8,
        payloadBase64: Buffer.from("not json").toString("base64"),
      },
    ]);
  });
});
