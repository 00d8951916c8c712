import { once } from "node:events";
import { createWriteStream, renameSync } from "node:fs";
import { finished } from "node:stream/promises";
import { Parcels } from "./parcel-event.js";

export const TRAINING_ROWS = 200_000;
const TRAINING_DAYS = 14;
const TRAINING_SEED = 20_260_501;
const TRAINING_START_MS = Date.UTC(2026, 4, 1);
const STEP_MS = (TRAINING_DAYS * 86_400_000) / TRAINING_ROWS;

/** Writes the demo's training file: fourteen invented days, the same bytes each time. Complete or not there at all. */
export async function writeTraining(path: string, rows: number = TRAINING_ROWS): Promise<void> {
  const parcels = new Parcels(TRAINING_SEED);
  const partial = `${path}.partial`;
  const file = createWriteStream(partial);
  const failed = once(file, "error").then(([error]) => Promise.reject(error));
  failed.catch(() => {});
  file.write(`${COLUMNS.join(",")}\n`);
  for (let from = 0; from < rows; from += ROWS_AT_ONCE) {
    const count = Math.min(ROWS_AT_ONCE, rows - from);
    const lines = Array.from({ length: count }, (_, i) => trainingLine(parcels, from + i));
    if (!file.write(lines.join(""))) await Promise.race([once(file, "drain"), failed]);
  }
  file.end();
  await finished(file);
  renameSync(partial, path);
}

const ROWS_AT_ONCE = 2_000;

const COLUMNS = [
  "measured_at",
  "depot",
  "cargo_temp",
  "ambient_temp",
  "humidity",
  "door_openings",
  "transit_hours",
  "dwell_minutes",
  "battery_volts",
] as const;

function trainingLine(parcels: Parcels, index: number): string {
  const event = parcels.event(index, 0);
  const measuredAt = new Date(TRAINING_START_MS + index * STEP_MS).toISOString();
  const cells = COLUMNS.map((column) => (column === "measured_at" ? measuredAt : (event[column] ?? "")));
  return `${cells.join(",")}\n`;
}
