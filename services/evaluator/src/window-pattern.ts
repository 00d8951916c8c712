import type { HeldFeature } from "@moorline/baseline";
import {
  type Decision,
  type DecisionGround,
  type NumericSide,
  type Reading,
  readPattern,
} from "@moorline/stats";

/** Index of the median among the watched shares: its dependence stands for that of the whole. */
const MEDIAN = 5;
const UNTOLD: ReadonlySet<Reading["kind"]> = new Set(["none", "thin", "cannot tell"]);

/** What the pattern of a window amounts to, where it is off and the pattern has a name; null else. */
export function patternOf(
  { state, evidence }: Decision,
  production: NumericSide,
  held: HeldFeature,
  { tolerance }: DecisionGround,
  unit: string | null,
): Reading | null {
  if (evidence === null || (state !== "adrift" && state !== "straining")) return null;
  const designEffect = production.cdf.n === 0 ? 1 : tolerance.designEffect(MEDIAN, 1, production.cdf.n);
  const reading = readPattern(held.side, production, { designEffect, unit });
  return UNTOLD.has(reading.kind) ? null : reading;
}
