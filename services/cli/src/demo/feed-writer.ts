import {
  appendFileSync,
  closeSync,
  existsSync,
  fstatSync,
  openSync,
  readFileSync,
  readSync,
  truncateSync,
  writeFileSync,
} from "node:fs";
import type { DemoFolder } from "./demo-folder.js";
import { Parcels } from "./parcel-event.js";
import { SeededRandom } from "./random.js";

/** Event time passes this many times faster than the clock. */
export const EVENT_TIME_FACTOR = 60;
const EVENTS_PER_EVENT_MINUTE = 150;
const STEP_MS = 60_000 / EVENTS_PER_EVENT_MINUTE;
/** From this event minute on the compressors tire, over so many minutes. */
export const DRIFT_FROM_MINUTE = 40;
const DRIFT_RAMP_MINUTES = 8;
const FEED_SEED = 7_460;
const PARTITION_SEED = 46;
const TICK_MS = 200;

/**
 * Appends invented events to the feed's files, an event minute each second. Event i follows from the feed's origin and i alone; the
 * writer goes on after the last event that the files hold. What reads the files is what reads any other files.
 */
export class FeedWriter {
  readonly resumed: boolean;
  readonly originMs: number;
  readonly #folder: DemoFolder;
  readonly #parcels = new Parcels(FEED_SEED);
  #next: number;
  #startedAtMs = 0;
  #startIndex = 0;
  #timer: NodeJS.Timeout | null = null;
  #onFailure: (error: unknown) => void = () => {};

  constructor(folder: DemoFolder, nowMs: number) {
    this.#folder = folder;
    this.resumed = existsSync(folder.origin);
    if (!this.resumed) {
      for (const path of folder.feed) writeFileSync(path, "");
      writeFileSync(folder.origin, `${JSON.stringify({ originMs: Math.floor(nowMs / 60_000) * 60_000 })}\n`);
    }
    this.originMs = (JSON.parse(readFileSync(folder.origin, "utf8")) as { originMs: number }).originMs;
    const last = Math.max(-1, ...folder.feed.map((path) => this.#lastIndexOf(path)));
    this.#next = last + 1;
  }

  /** Event time of the next event. */
  get nextMs(): number {
    return this.#timeOf(this.#next);
  }

  /** Are the compressors tired already? */
  get isTired(): boolean {
    return tirednessAt((this.nextMs - this.originMs) / 60_000) > 0;
  }

  start(onFailure: (error: unknown) => void): void {
    this.#onFailure = onFailure;
    this.#startedAtMs = performance.now();
    this.#startIndex = this.#next;
    this.#timer = setInterval(() => this.#tick(), TICK_MS);
  }

  stop(): void {
    if (this.#timer !== null) clearInterval(this.#timer);
    this.#timer = null;
  }

  #tick(): void {
    const eventMs = (performance.now() - this.#startedAtMs) * EVENT_TIME_FACTOR;
    const until = this.#startIndex + Math.floor(eventMs / STEP_MS);
    const lines: string[][] = this.#folder.feed.map(() => []);
    for (; this.#next < until; this.#next++) {
      const partition = Math.floor(new SeededRandom(PARTITION_SEED, this.#next).uniform() * lines.length);
      lines[partition]!.push(feedLine(this.#parcels, this.#next, this.originMs));
    }
    try {
      for (const [partition, path] of this.#folder.feed.entries()) {
        if (lines[partition]!.length > 0) appendFileSync(path, lines[partition]!.join(""));
      }
    } catch (error) {
      this.stop();
      this.#onFailure(error);
    }
  }

  #timeOf(index: number): number {
    return timeOf(index, this.originMs);
  }

  /** Index of a file's last whole line, -1 for none. A line that was cut by a kill is taken off. */
  #lastIndexOf(path: string): number {
    const { line, wholeBytes, sizeBytes } = lastWholeLine(path);
    if (wholeBytes < sizeBytes) truncateSync(path, wholeBytes);
    if (line === null) return -1;
    const { measured_at } = JSON.parse(line) as { measured_at: string };
    return Math.round((Date.parse(measured_at) - this.originMs) / STEP_MS);
  }
}

/** 0 before the compressors tire, 1 when they are tired. */
export function tirednessAt(minute: number): number {
  return Math.min(1, Math.max(0, (minute - DRIFT_FROM_MINUTE) / DRIFT_RAMP_MINUTES));
}

function timeOf(index: number, originMs: number): number {
  return originMs + index * STEP_MS;
}

/** One line of the feed. */
export function feedLine(parcels: Parcels, index: number, originMs: number): string {
  const atMs = timeOf(index, originMs);
  const event = parcels.event(index, tirednessAt((atMs - originMs) / 60_000));
  const payload = {
    measured_at: new Date(atMs).toISOString(),
    parcel: `P-${String(index).padStart(8, "0")}`,
    depot: event.depot,
    cargo: { temp: event.cargo_temp },
    ambient: { temp: event.ambient_temp, humidity: event.humidity },
    doors: { openings: event.door_openings },
    route: { transit_hours: event.transit_hours, dwell_minutes: event.dwell_minutes },
    logger: { battery: event.battery_volts },
  };
  return `${JSON.stringify(payload)}\n`;
}

const TAIL_BYTES = 4_096;

function lastWholeLine(path: string): { line: string | null; wholeBytes: number; sizeBytes: number } {
  if (!existsSync(path)) writeFileSync(path, "");
  const file = openSync(path, "r");
  try {
    const sizeBytes = fstatSync(file).size;
    const tail = Buffer.alloc(Math.min(TAIL_BYTES, sizeBytes));
    readSync(file, tail, 0, tail.length, sizeBytes - tail.length);
    const end = tail.lastIndexOf(0x0a);
    if (end < 0) return { line: null, wholeBytes: sizeBytes - tail.length, sizeBytes };
    const start = end === 0 ? 0 : tail.lastIndexOf(0x0a, end - 1) + 1;
    return {
      line: tail.toString("utf8", start, end),
      wholeBytes: sizeBytes - tail.length + end + 1,
      sizeBytes,
    };
  } finally {
    closeSync(file);
  }
}
