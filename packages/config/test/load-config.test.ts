import { mkdtempSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { isMoorlineError } from "@moorline/errors";
import { describe, expect, it } from "vitest";
import { type ConfigProblem, formatProblem, loadConfig, parseConfig } from "../src/index.js";

const FULL = `store: sqlite:./moorline.db
gateway: { port: 7460 }
streams:
  - name: chill-risk
    source: { kafka: { brokers: [localhost:9092], topics: [parcel-features], group: moorline-chill-risk } }
    payload: { format: json, eventTime: measured_at }
    slices: [ depot ]
    features:
      - { name: cargo_temp, path: cargo.temp, unit: °C }
      - { name: dwell }
    horizons: [ 1h, 5m ]
    lateness: 2m
`;

function problemsOf(text: string, env: Record<string, string> = {}): ConfigProblem[] {
  try {
    parseConfig(text, { env });
  } catch (error) {
    if (isMoorlineError(error) && error.code === "MOORLINE_CONFIG_INVALID") {
      return error.details["problems"] as ConfigProblem[];
    }
    throw error;
  }
  throw new Error("the config was taken");
}

/** Replaces one line of the full config. */
const withLine = (line: string, by: string) => {
  if (!FULL.includes(line)) throw new Error(`no line ${line}`);
  return FULL.replace(line, by);
};

describe("parseConfig", () => {
  it("fills in every default and gives milliseconds", () => {
    const config = parseConfig(FULL, { folder: "/srv/moorline" });
    expect(config).toEqual({
      store: { kind: "sqlite", path: "/srv/moorline/moorline.db" },
      gateway: { host: "127.0.0.1", port: 7460, publicUrl: "http://localhost:7460" },
      collector: {
        host: "127.0.0.1",
        port: 7461,
        checkpointMs: 5_000,
        checkpointEvents: 200_000,
        checkpointBytes: 256 * 1024 * 1024,
      },
      evaluator: { host: "127.0.0.1", port: 7462, tickMs: 1_000 },
      streams: [
        {
          name: "chill-risk",
          source: {
            kind: "kafka",
            brokers: ["localhost:9092"],
            topics: ["parcel-features"],
            group: "moorline-chill-risk",
            deadLetterTopic: "parcel-features.dead-letters",
            start: "earliest",
            sessionTimeoutMs: 30_000,
          },
          payload: { format: "json", eventTime: ["measured_at"], eventTimeUnit: "iso" },
          slices: [{ key: "depot", path: ["depot"] }],
          sliceLimit: 50,
          features: [
            { name: "cargo_temp", kind: "numeric", path: ["cargo", "temp"], unit: "°C" },
            { name: "dwell", kind: "numeric", path: ["dwell"], unit: null },
          ],
          paneMs: 60_000,
          horizons: [
            { label: "5m", ms: 300_000 },
            { label: "1h", ms: 3_600_000 },
          ],
          latenessMs: 120_000,
          idleAfterMs: 300_000,
          silentAfterMs: 600_000,
          maxAheadMs: 3_600_000,
          maxAgeMs: 30 * 86_400_000,
          decision: { persistence: 3, releaseAfter: 3, bodyFloor: 0.05, tailFactor: 1.5 },
        },
      ],
    });
  });

  it("takes a file source, with absolute paths to read and the written ones as names", () => {
    const text = withLine(
      "{ kafka: { brokers: [localhost:9092], topics: [parcel-features], group: moorline-chill-risk } }",
      "{ file: { paths: [feed/a.ndjson, /var/b.ndjson], follow: false, deadLetters: bad.ndjson } }",
    );
    expect(parseConfig(text, { folder: "/srv" }).streams[0]!.source).toEqual({
      kind: "file",
      paths: ["/srv/feed/a.ndjson", "/var/b.ndjson"],
      names: ["feed/a.ndjson", "/var/b.ndjson"],
      follow: false,
      deadLetterPath: "/srv/bad.ndjson",
    });
  });

  it("lists every problem at once, each with the line and column of what is wrong", () => {
    const problems = problemsOf(`stroe: x
gateway: { port: 99999 }
streams:
  - name: chill-risk
    source: { kafka: { brokers: localhost:9092, topics: [parcel-features] } }
    payload: { format: avro, eventTime: measured..at }
    slices: [ depot, depot ]
    features:
      - { name: cargo_temp, path: cargo.temp, unit: 3 }
      - { name: cargo_temp, kind: categorical }
    horizons: [ 5m, 90s, 24 ]
    latenes: 2m
alerts: { webhooks: [] }
`);
    expect(problems.map((p) => [p.line, p.column, p.at])).toEqual([
      [1, 1, "stroe"],
      [2, 18, "gateway.port"],
      [5, 22, "streams[0].source.kafka.group"],
      [5, 33, "streams[0].source.kafka.brokers"],
      [6, 24, "streams[0].payload.format"],
      [6, 41, "streams[0].payload.eventTime"],
      [7, 22, "streams[0].slices[1]"],
      [9, 53, "streams[0].features[0].unit"],
      [10, 17, "streams[0].features[1].name"],
      [10, 35, "streams[0].features[1].kind"],
      [11, 21, "streams[0].horizons[1]"],
      [11, 26, "streams[0].horizons[2]"],
      [12, 5, "streams[0].latenes"],
      [13, 1, "alerts"],
    ]);
    expect(formatProblem("moorline.yaml", problems[12]!)).toBe(
      "moorline.yaml:12:5 streams[0].latenes: is not a known key: did you mean lateness?",
    );
  });

  const one: readonly (readonly [string, string, string, string])[] = [
    ["slices: [ depot ]", "slices: [ 7 ]", "streams[0].slices[0]", "does not take the number 7"],
    ["slices: [ depot ]", "slices: [ { key: a, kay: b } ]", "streams[0].slices[0].kay", "did you mean key"],
    ["    lateness: 2m\n", "    lateness: 2\n", "streams[0].lateness", "not the number 2"],
    ["    lateness: 2m\n", "    lateness: 2 min\n", "streams[0].lateness", "with its unit"],
    ["    lateness: 2m\n", "    lateness: 2d\n", "streams[0].lateness", "1,440 panes"],
    ["[ 1h, 5m ]", "[ 60m, 1h ]", "streams[0].horizons[1]", "as long as 60m"],
    ["[ 1h, 5m ]", "[ 0m ]", "streams[0].horizons[0]", "whole number of panes"],
    ["[ 1h, 5m ]", "[]", "streams[0].horizons", "too small"],
    ["path: cargo.temp,", "path: cargo..temp,", "streams[0].features[0].path", "single dots"],
    ["- { name: dwell }", "- dwell", "streams[0].features[1]", "a block of keys"],
    ["- { name: dwell }", '- { name: "a\\tb" }', "streams[0].features[1].name", "control characters"],
    ["store: sqlite:./moorline.db", "store: mysql://x", "store", "sqlite:FILE or postgres://"],
    ["brokers: [localhost:9092]", "brokers: [localhost]", "streams[0].source.kafka.brokers[0]", "HOST:PORT"],
    ["source: { kafka", "source: { kaffka", "streams[0].source.kaffka", "did you mean kafka"],
  ];
  it.each(one)("answers %s → %s at its place", (line, by, at, says) => {
    const found = problemsOf(withLine(line, by)).find((problem) => problem.at === at);
    expect(found?.sentence).toContain(says);
  });

  it("says that a source must be one of two kinds, and that lines of a file need an event time", () => {
    const both = withLine("source: { kafka", "source: { file: { paths: [a] }, kafka");
    expect(problemsOf(both).map((p) => p.sentence)).toEqual([
      "has both kafka and file: keep one, or make two streams",
    ]);
    const none = FULL.replace(/source: .*/, "source: {}");
    expect(problemsOf(none).map((p) => p.sentence)).toEqual([
      "needs one of kafka and file: say where events come from",
    ]);
    const timeless = FULL.replace(/source: .*/, "source: { file: { paths: [a] } }").replace(
      /payload: .*/,
      "payload: {}",
    );
    expect(problemsOf(timeless)[0]).toMatchObject({ line: 6, at: "streams[0].payload" });
  });

  it("reports syntax and doubled keys with their line", () => {
    expect(problemsOf("store: a\nstore: b\n")[0]).toMatchObject({ line: 2, column: 1 });
    expect(problemsOf("streams:\n  - {\n")[0]!.sentence).toContain("is not YAML");
  });

  it("names what an empty file misses, and refuses a list or a text as the whole", () => {
    expect(problemsOf("")).toMatchObject([{ at: "streams", sentence: "is needed here but missing: add it" }]);
    expect(problemsOf("- a\n")[0]!.sentence).toBe("expected a block of keys, not a list");
    expect(problemsOf("just text\n")[0]!.sentence).toContain('not the text "just text"');
  });

  it("treats __proto__ as an unknown key and leaves Object.prototype alone", () => {
    const problems = problemsOf(`${FULL}__proto__: { polluted: true }\n`);
    expect(problems.map((p) => p.at)).toEqual(["__proto__"]);
    expect(Object.hasOwn(Object.prototype, "polluted")).toBe(false);
  });

  it("refuses aliases that multiply without end in a clear sentence", () => {
    const levels = Array.from(
      { length: 12 },
      (_, i) =>
        `l${i}: &l${i} [${Array(9)
          .fill(i ? `*l${i - 1}` : "x")
          .join()}]`,
    );
    expect(() => parseConfig(`${levels.join("\n")}\n`)).toThrow(/cannot be read: .*alias/);
  });

  it("lets the environment go before the file, and names the variable when its value is wrong", () => {
    const env = {
      MOORLINE_STORE: "postgres://u:p@db/moorline",
      MOORLINE_GATEWAY_PORT: "8080",
      MOORLINE_GATEWAY_HOST: "",
      MOORLINE_KAFKA_BROKERS: "k1:9092, k2:9092",
    };
    const config = parseConfig(FULL, { env });
    expect(config.store).toEqual({ kind: "postgres", url: "postgres://u:p@db/moorline" });
    expect(config.gateway).toEqual({ host: "127.0.0.1", port: 8080, publicUrl: "http://localhost:8080" });
    expect(config.streams[0]!.source).toMatchObject({ brokers: ["k1:9092", "k2:9092"] });
    const problems = problemsOf(FULL, { MOORLINE_GATEWAY_PORT: "eighty", MOORLINE_KAFKA_BROKERS: "k1" });
    expect(problems.map((p) => [p.line, p.at])).toEqual([
      [null, "MOORLINE_GATEWAY_PORT"],
      [null, "MOORLINE_KAFKA_BROKERS"],
    ]);
    expect(formatProblem("m.yaml", problems[0]!)).toMatch(
      /^environment MOORLINE_GATEWAY_PORT: expected a number/,
    );
  });
});

describe("loadConfig", () => {
  it("says plainly when there is no such file, or it is a folder", () => {
    expect(() => loadConfig("/nowhere/moorline.yaml")).toThrow("there is no such file");
    expect(() => loadConfig(tmpdir())).toThrow("it is a directory");
  });

  it("takes relative paths from the folder of the file", () => {
    const folder = mkdtempSync(join(tmpdir(), "moorline-config-"));
    writeFileSync(join(folder, "moorline.yaml"), FULL);
    const config = loadConfig(join(folder, "moorline.yaml"), {});
    expect(config.store).toEqual({ kind: "sqlite", path: join(folder, "moorline.db") });
  });
});
