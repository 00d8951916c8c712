import { changesFor } from "./changes.js";
import { modelOf } from "./models.js";
import { delayOf } from "./run-feature.js";
import { RULE_OF_A_TEAM } from "./setting.js";
import { quantilesOf, thresholdsOf } from "./simulated-feature.js";
import { answerJobs } from "./worker-pool.js";

/** One feature of a stream in which one thing changes. */
export interface DelayJob {
  readonly model: string;
  readonly change: string;
  readonly seed: number;
  readonly thresholdSeed: number;
  readonly quiet: number;
  readonly longest: number;
}

answerJobs<DelayJob, number | null>((job) => {
  const model = modelOf(job.model);
  const thresholds = thresholdsOf(model, job.thresholdSeed);
  const change = changesFor(quantilesOf(model, job.thresholdSeed), job.seed + 1)[job.change]!;
  return delayOf(model, job.seed, RULE_OF_A_TEAM, thresholds, change, job);
});
