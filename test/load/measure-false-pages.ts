// How often the decision pages when nothing changed: node --import tsx test/load/measure-false-pages.ts (after a build)
//   [--features 500] [--days 30] [--other-features 100] [--seed 20261201] [--streams iid,ar,seasonal,bursts,weekly]
// One-minute windows of 1,000 values, through the code that judges windows in production. Talks on stderr; the last line of stdout is one JSON object.
import { availableParallelism } from "node:os";
import { parseArgs } from "node:util";
import { gammaQuantile } from "@moorline/stats";
import { modelOf } from "./decision/models.js";
import type { QuietJob } from "./decision/quiet-job.js";
import type { QuietRun } from "./decision/run-feature.js";
import { FEATURES_A_TEAM, MONTH_DAYS, RULE_OF_A_TEAM, VALUES_A_WINDOW } from "./decision/setting.js";
import { runJobs } from "./decision/worker-pool.js";

const { values: options } = parseArgs({
  options: {
    features: { type: "string", default: "500" },
    "other-features": { type: "string", default: "100" },
    days: { type: "string", default: "30" },
    seed: { type: "string", default: "20261201" },
    streams: { type: "string", default: "iid,ar,seasonal,bursts,weekly" },
  },
});
const seed = Number(options.seed);
const windows = Number(options.days) * 1_440;
/** The streams that a goal is set for run at full size. */
const FULL = new Set(["iid", "ar", "seasonal"]);

const streams: Record<string, unknown> = {};
for (const [index, name] of options.streams.split(",").entries()) {
  const model = modelOf(name);
  const features = Number(FULL.has(name) ? options.features : options["other-features"]);
  const jobs = Array.from({ length: features }, (_, feature): QuietJob => {
    const own = seed + 1_000_003 * (index + 1) + 7_919 * feature;
    return { model: name, seed: own, thresholdSeed: seed + index, windows };
  });
  const started = performance.now();
  const runs = await runJobs<QuietJob, QuietRun>(
    new URL("./decision/quiet-job.ts", import.meta.url),
    jobs,
    (done) => {
      if (done % Math.max(1, Math.round(features / 10)) === 0)
        console.error(`${name}: ${done} of ${features} features, ${seconds(started)} s`);
    },
  );
  const total = (pick: (run: QuietRun) => number) => runs.reduce((sum, run) => sum + pick(run), 0);
  const featureMonths = (features * Number(options.days)) / MONTH_DAYS;
  const pages = total((run) => run.pages);
  streams[name] = {
    model: model.describe,
    featureMonths,
    pages,
    pagesPerMonth: (pages / featureMonths) * FEATURES_A_TEAM,
    upper95: (gammaQuantile(0.95, pages + 1) / featureMonths) * FEATURES_A_TEAM,
    featuresThatPaged: runs.filter((run) => run.pages > 0).length,
    timesAdrift: total((run) => run.changes),
    strainingShare: total((run) => run.strainingWindows) / total((run) => run.windows),
    adriftShare: total((run) => run.adriftWindows) / total((run) => run.windows),
    seconds: Number(seconds(started)),
  };
  console.error(JSON.stringify({ [name]: streams[name] }));
}

const size = { valuesAWindow: VALUES_A_WINDOW, windowMinutes: 1, days: Number(options.days) };
const per = `${FEATURES_A_TEAM} features and ${MONTH_DAYS} days`;
console.log(
  JSON.stringify({
    measure: "false-pages",
    per,
    ...size,
    zPage: RULE_OF_A_TEAM.zPage,
    seed,
    streams,
    node: process.version,
    cores: availableParallelism(),
  }),
);

function seconds(since: number): string {
  return ((performance.now() - since) / 1_000).toFixed(0);
}
