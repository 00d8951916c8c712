import type { StreamConfig } from "@moorline/config";
import { DAY_MS, HOUR_MS, hasLongRollups } from "@moorline/windows";
import type { FreshRollups } from "./fresh-rollups.js";
import { rollupOf } from "./roll-pane.js";

const LEVELS = [
  { level: "hour", from: "pane", lengthMs: HOUR_MS },
  { level: "day", from: "hour", lengthMs: DAY_MS },
] as const;

/**
 * Hour and day rollups that contain a pane and are over, made from the level below into `fresh`. Called when the pane that ends an hour or day
 * closes, and for a late pane in one that was over already.
 */
export async function rollLong(
  stream: StreamConfig,
  slices: readonly string[],
  paneStartMs: number,
  closedThroughMs: number,
  fresh: FreshRollups,
  rest: () => Promise<void>,
): Promise<void> {
  if (!hasLongRollups(stream.paneMs)) return;
  for (const { level, from, lengthMs } of LEVELS) {
    const startMs = Math.floor(paneStartMs / lengthMs) * lengthMs;
    if (startMs + lengthMs > closedThroughMs) return;
    for (const slice of slices) {
      for (const { name: feature } of stream.features) {
        const range = { fromMs: startMs, toMs: startMs + lengthMs };
        const rows = await fresh.read({ stream: stream.name, level: from, slice, feature, ...range });
        if (rows.length === 0) continue;
        const amended = rows.some((row) => row.amended);
        fresh.add(
          rollupOf(
            level,
            startMs,
            slice,
            feature,
            rows.map((row) => row.body),
            amended,
          ),
        );
        await rest();
      }
    }
  }
}
