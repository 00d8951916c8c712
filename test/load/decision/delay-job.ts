import { DEFAULT_DECISION_RULE } from "@moorline/stats";
import { changesFor } from "./changes.js";
import { modelOf } from "./models.js";
import { delayOf } from "./run-feature.js";
import { quantilesOf, thresholdsOf } from "./simulated-feature.js";
import { answerJobs } from "./worker-pool.js";

/** One feature of a stream in which one thing changes. */
export interface DelayJob {
  readonly model: string;
  readonly change: string;
  readonly seed: number;
  readonly thresholdSeed: number;
  readonly zPage: number;
  readonly quiet: number;
  readonly longest: number;
}

answerJobs<DelayJob, number | null>((job) => {
  const model = modelOf(job.model);
  const thresholds = thresholdsOf(model, job.thresholdSeed);
  const change = changesFor(quantilesOf(model, job.thresholdSeed), job.seed + 1)[job.change]!;
  const rule = { ...DEFAULT_DECISION_RULE, zPage: job.zPage };
  return delayOf(model, job.seed, rule, thresholds, change, job);
});
