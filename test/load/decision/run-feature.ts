import { type DecisionMemory, type DecisionRule, decide } from "@moorline/stats";
import type { Change } from "./changes.js";
import { SimulatedFeature } from "./simulated-feature.js";
import type { StreamModel } from "./stream-model.js";

/** Quiet windows after which an adrift feature is a new incident. */
const NEW_AFTER = 60;

export interface QuietRun {
  readonly windows: number;
  /** Times the feature went adrift after at least sixty windows in which it was not. */
  readonly pages: number;
  /** Every time it went adrift. */
  readonly changes: number;
  readonly strainingWindows: number;
  readonly adriftWindows: number;
}

/** So many windows of one feature in which nothing changed. */
export function runQuiet(
  model: StreamModel,
  seed: number,
  rule: DecisionRule,
  thresholds: readonly number[],
  windows: number,
): QuietRun {
  const feature = new SimulatedFeature(model, seed, rule, thresholds);
  let memory: DecisionMemory | null = null;
  const run = { windows, pages: 0, changes: 0, strainingWindows: 0, adriftWindows: 0 };
  let lastAdrift = Number.NEGATIVE_INFINITY;
  for (let window = 0; window < windows; window += 1) {
    const before = memory?.state;
    const decision = decide(memory, feature.next(), feature.ground);
    memory = decision.memory;
    if (decision.state === "straining") run.strainingWindows += 1;
    if (decision.state !== "adrift") continue;
    run.adriftWindows += 1;
    if (before !== "adrift") {
      run.changes += 1;
      if (window - lastAdrift > NEW_AFTER) run.pages += 1;
    }
    lastAdrift = window;
  }
  return run;
}

/** Windows from a change until the feature is adrift, after `quiet` windows without it; null when it is not within `longest`. */
export function delayOf(
  model: StreamModel,
  seed: number,
  rule: DecisionRule,
  thresholds: readonly number[],
  change: Change,
  { quiet, longest }: { readonly quiet: number; readonly longest: number },
): number | null {
  const feature = new SimulatedFeature(model, seed, rule, thresholds);
  let memory: DecisionMemory | null = null;
  for (let window = 0; window < quiet; window += 1)
    memory = decide(memory, feature.next(), feature.ground).memory;
  if (memory?.state === "adrift") return null;
  for (let window = 1; window <= longest; window += 1) {
    const decision = decide(memory, feature.next(change), feature.ground);
    memory = decision.memory;
    if (decision.state === "adrift") return window;
  }
  return null;
}
