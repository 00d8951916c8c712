import { modelOf } from "./models.js";
import { type QuietRun, runQuiet } from "./run-feature.js";
import { RULE_OF_A_TEAM } from "./setting.js";
import { thresholdsOf } from "./simulated-feature.js";
import { answerJobs } from "./worker-pool.js";

/** One feature of a stream in which nothing changes. */
export interface QuietJob {
  readonly model: string;
  readonly seed: number;
  readonly thresholdSeed: number;
  readonly windows: number;
}

answerJobs<QuietJob, QuietRun>((job) => {
  const model = modelOf(job.model);
  const thresholds = thresholdsOf(model, job.thresholdSeed);
  return runQuiet(model, job.seed, RULE_OF_A_TEAM, thresholds, job.windows);
});
