import { Writable } from "node:stream";
import pino, { type DestinationStream, type Logger } from "pino";

export type LogFormat = "json" | "lines";

export interface LoggerOptions {
  readonly service: string;
  readonly level: string;
  /** `json`: one object a line, for machines. `lines`: time, level, sentence and facts, for people. */
  readonly format: LogFormat;
  readonly destination: NodeJS.WritableStream;
}

/** Secrets may stand in a store address; they never stand in a log. */
const REDACTED = ["password", "*.password", "secret", "*.secret", "token", "*.token", "sasl", "*.sasl"];

export function createLogger(options: LoggerOptions): Logger {
  const target: DestinationStream =
    options.format === "json"
      ? { write: (line) => void options.destination.write(line) }
      : linesForPeople(options.destination);
  return pino(
    {
      level: options.level,
      base: { service: options.service },
      timestamp: pino.stdTimeFunctions.isoTime,
      redact: { paths: REDACTED, censor: "(not shown)" },
    },
    target,
  );
}

const HIDDEN = new Set(["level", "time", "service", "msg", "pid", "hostname"]);

/** One plain line a record: `10:31:07 warn collector: sentence (key=value, …)`. */
function linesForPeople(destination: NodeJS.WritableStream): Writable {
  return new Writable({
    write(chunk: Buffer, _encoding, done) {
      destination.write(`${plainLine(chunk.toString())}\n`);
      done();
    },
  });
}

function plainLine(json: string): string {
  const record = JSON.parse(json) as Record<string, unknown>;
  const facts = Object.entries(record)
    .filter(([key]) => !HIDDEN.has(key))
    .map(
      ([key, value]) =>
        `${key}=${typeof value === "object" && value !== null ? briefly(value) : String(value)}`,
    );
  const level = pino.levels.labels[record["level"] as number] ?? "info";
  const time = String(record["time"]).slice(11, 19);
  return `${time} ${level} ${String(record["service"])}: ${String(record["msg"] ?? "")}${facts.length > 0 ? ` (${facts.join(", ")})` : ""}`;
}

/** An error's message, or the value as JSON, on one line. */
function briefly(value: object): string {
  return "message" in value && typeof value.message === "string" ? value.message : JSON.stringify(value);
}
