import { DEFAULT_DECISION_RULE } from "@moorline/stats";
import { modelOf } from "./models.js";
import { type QuietRun, runQuiet } from "./run-feature.js";
import { thresholdsOf } from "./simulated-feature.js";
import { answerJobs } from "./worker-pool.js";

/** One feature of a stream in which nothing changes. */
export interface QuietJob {
  readonly model: string;
  readonly seed: number;
  readonly thresholdSeed: number;
  readonly windows: number;
  readonly zPage: number;
}

answerJobs<QuietJob, QuietRun>((job) => {
  const model = modelOf(job.model);
  const thresholds = thresholdsOf(model, job.thresholdSeed);
  const rule = { ...DEFAULT_DECISION_RULE, zPage: job.zPage };
  return runQuiet(model, job.seed, rule, thresholds, job.windows);
});
