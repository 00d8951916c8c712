// How many windows a change takes until the feature is adrift: node --import tsx test/load/measure-delay.ts (after a build)
//   [--repeats 150] [--seed 20261202] [--streams "iid,ar,ar, 7 days,…"]
// One-minute windows of 1,000 values, through the code that judges windows in production. Talks on stderr; the last line of stdout is one JSON object.
import { availableParallelism } from "node:os";
import { parseArgs } from "node:util";
import { changesFor } from "./decision/changes.js";
import type { DelayJob } from "./decision/delay-job.js";
import { modelOf } from "./decision/models.js";
import { RULE_OF_A_TEAM, VALUES_A_WINDOW } from "./decision/setting.js";
import { runJobs } from "./decision/worker-pool.js";

const { values: options } = parseArgs({
  options: {
    repeats: { type: "string", default: "150" },
    "seasonal-repeats": { type: "string", default: "24" },
    seed: { type: "string", default: "20261202" },
  },
});
const seed = Number(options.seed);
const HOUR = 60;

/** Streams with how long a change is waited for. */
const STREAMS = [
  { name: "iid", repeats: Number(options.repeats), longest: 600 },
  { name: "ar", repeats: Number(options.repeats), longest: 600 },
  { name: "ar, 7 days", repeats: Math.ceil(Number(options.repeats) / 2.5), longest: 600 },
  { name: "seasonal, equal days", repeats: Number(options["seasonal-repeats"]), longest: 1_500 },
  { name: "seasonal", repeats: Number(options["seasonal-repeats"]), longest: 1_500 },
] as const;

const streams: Record<string, unknown> = {};
for (const [index, { name, repeats, longest }] of STREAMS.entries()) {
  const model = modelOf(name);
  const changes: Record<string, unknown> = {};
  for (const change of Object.keys(changesFor(() => 0, 1))) {
    const jobs = Array.from({ length: repeats }, (_, i): DelayJob => {
      // Changes begin at every hour of the day.
      const quiet = HOUR + (i % 24) * HOUR;
      const own = seed + 1_000_003 * (index + 1) + 7_919 * i;
      return { model: name, change, seed: own, thresholdSeed: seed + index, quiet, longest };
    });
    const file = new URL("./decision/delay-job.ts", import.meta.url);
    const delays = await runJobs<DelayJob, number | null>(file, jobs, () => {});
    const found = delays.filter((delay) => delay !== null);
    // One that was not found is later than all that were.
    const sorted = delays.map((delay) => delay ?? Number.POSITIVE_INFINITY).sort((a, b) => a - b);
    const at = (rank: number) => {
      const delay = sorted[Math.ceil(rank * sorted.length) - 1]!;
      return Number.isFinite(delay) ? delay : null;
    };
    changes[change] = { repeats, detected: found.length / repeats, median: at(0.5), p90: at(0.9) };
    console.error(`${name}, ${change}: ${JSON.stringify(changes[change])}`);
  }
  streams[name] = { model: model.describe, longest, changes };
}

console.log(
  JSON.stringify({
    measure: "delay",
    valuesAWindow: VALUES_A_WINDOW,
    windowMinutes: 1,
    zPage: RULE_OF_A_TEAM.zPage,
    seed,
    streams,
    node: process.version,
    cores: availableParallelism(),
  }),
);
