import type { DecisionConfig, StreamConfig } from "@moorline/config";
import { criticalZ, DEFAULT_DECISION_RULE, type DecisionRule } from "@moorline/stats";

const MONTH_MS = 30 * 86_400_000;

/**
 * The decision rule of a stream: what its config (or another set of tolerances) says, and the critical value for as many windows as it decides in a month.
 *
 * Edges  slices are counted in powers of two, so that one more of them does not move the critical value each time.
 */
export function streamRule(
  stream: StreamConfig,
  slices: number,
  decision: DecisionConfig = stream.decision,
): DecisionRule {
  const { persistence, releaseAfter, bodyFloor, tailFactor } = decision;
  const series = stream.features.length * 2 ** Math.ceil(Math.log2(Math.max(1, slices)));
  const windows = stream.horizons.reduce((sum, { ms }) => sum + MONTH_MS / ms, 0);
  return {
    ...DEFAULT_DECISION_RULE,
    persistence,
    releaseAfter,
    bodyFloor,
    tailFactor,
    zPage: criticalZ(series * windows),
  };
}
