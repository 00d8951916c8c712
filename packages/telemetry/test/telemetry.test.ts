import { readFileSync } from "node:fs";
import { Writable } from "node:stream";
import { afterEach, describe, expect, it } from "vitest";
import { createTelemetry, type HealthServer, METRIC_TABLE, startHealthServer } from "../src/index.js";

const readme = readFileSync(new URL("../README.md", import.meta.url), "utf8");

function collecting(): { stream: Writable; text: () => string } {
  let text = "";
  const stream = new Writable({
    write(chunk: Buffer, _encoding, done) {
      text += chunk.toString();
      done();
    },
  });
  return { stream, text: () => text };
}

describe("the metric table", () => {
  it("stands in the README row for row, and the README names no other metric", () => {
    const documented = readme
      .split("\n")
      .filter((line) => line.startsWith("| `moorline_"))
      .map((line) =>
        line
          .split("|")
          .slice(1, 5)
          .map((cell) => cell.trim().replaceAll("`", "")),
      );
    const table = Object.values(METRIC_TABLE).map((row) => [
      row.name,
      row.type,
      row.labels.join(", "),
      row.help,
    ]);
    expect(documented).toEqual(table);
  });

  it.each(Object.values(METRIC_TABLE))("$name ends in a base unit or a share, counters in _total", (row) => {
    expect(row.name).toMatch(row.type === "counter" ? /_total$/ : /^moorline_[a-z_]+$/);
    expect(row.name).not.toMatch(/_(ms|millis|percent|minutes)(_|$)/);
  });
});

describe("createTelemetry", () => {
  it("puts every metric on its own registry, so that two services in one process do not share", async () => {
    const [a, b] = [createTelemetry({ service: "a" }), createTelemetry({ service: "b" })];
    a.metrics.eventsTotal.inc({ stream: "s", outcome: "counted" }, 3);
    expect(await a.registry.metrics()).toContain('moorline_events_total{stream="s",outcome="counted"} 3');
    expect(await b.registry.metrics()).not.toContain('stream="s"');
  });

  it("writes one plain line a record for people, with its facts, an error's message and no secret", () => {
    const out = collecting();
    const { logger } = createTelemetry({
      service: "collector",
      logFormat: "lines",
      logDestination: out.stream,
    });
    logger.warn({ partition: 3, password: "hunter2", err: new Error("away") }, "the broker does not answer");
    expect(out.text()).toMatch(
      /^\d\d:\d\d:\d\d warn collector: the broker does not answer \(partition=3, password=\(not shown\), err=away\)\n$/,
    );
  });
});

describe("startHealthServer", () => {
  let server: HealthServer | undefined;
  afterEach(async () => {
    await server?.stop();
  });

  it("answers 503 with every reason until all parts are well", async () => {
    const telemetry = createTelemetry({ service: "collector", logDestination: collecting().stream });
    telemetry.health.set("store", "starting");
    telemetry.health.set("kafka", "no broker answers");
    server = await startHealthServer({ host: "127.0.0.1", port: 0 }, telemetry);
    const base = `http://127.0.0.1:${server.port}`;
    const red = await fetch(`${base}/readyz`);
    expect(red.status).toBe(503);
    expect(red.headers.get("content-type")).toContain("application/problem+json");
    expect(await red.json()).toMatchObject({
      status: 503,
      detail: "store: starting; kafka: no broker answers",
    });
    telemetry.health.set("store", null);
    telemetry.health.set("kafka", null);
    expect((await fetch(`${base}/readyz`)).status).toBe(200);
    expect((await fetch(`${base}/livez`)).status).toBe(200);
    const metrics = await fetch(`${base}/metrics`);
    expect(metrics.headers.get("content-type")).toContain("text/plain");
    expect(await metrics.text()).toContain("# TYPE moorline_events_total counter");
  });
});
