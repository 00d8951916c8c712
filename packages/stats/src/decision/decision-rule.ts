import { normalExceededBy } from "../special/normal.js";

/** How far from the baseline a feature may be, and for how long, before it counts. */
export interface DecisionRule {
  /** Blocks of windows in a row that must be off the same way before a feature is adrift, at every scale. */
  readonly persistence: number;
  /** Consecutive windows within tolerance before an adrift feature holds again. */
  readonly releaseAfter: number;
  /** Body: smallest difference of shares that matters. */
  readonly bodyFloor: number;
  /** Tails: smallest factor by which a share must grow to matter. */
  readonly tailFactor: number;
  /** Tails: largest factor to which a share must shrink to matter. */
  readonly tailLighterFactor: number;
  /** Heavier tails need at least this many events beyond the threshold. */
  readonly tailMinEvents: number;
  /** Lighter tails need at least this many events expected beyond it. */
  readonly tailMinExpected: number;
  /** Missing values: smallest difference of fractions that matters … */
  readonly missingFloor: number;
  /** … and smallest relative one. */
  readonly missingFactor: number;
  /** Effective events without a value, or below all of the baseline, that are enough to judge, however few were expected. */
  readonly unexpectedMinEvents: number;
  /** |z| of the pooled blocks that makes a feature adrift … */
  readonly zPage: number;
  /** … and the one that makes it strain: so much less. */
  readonly zStrainBelow: number;
  /** |z| below which an adrift feature is within tolerance again. */
  readonly zRelease: number;
  /** |z| that each of the blocks must reach by itself. */
  readonly zBlock: number;
  /** |z| must pass what the same rule finds in the baseline itself by this factor. */
  readonly guardFactor: number;
  /** Least number of effective events that must be expected on either side of a threshold. */
  readonly minExpected: number;
  /** Effective events (nm/(n + m)) below which a window is too thin to tell. */
  readonly minEvents: number;
  /** One window this far out is enough by itself … */
  readonly zAtOnce: number;
  /** … when a share moved by this much … */
  readonly bodyAtOnce: number;
  /** … or a tail's share grew by this factor … */
  readonly tailFactorAtOnce: number;
  /** … with this many events beyond the threshold. */
  readonly tailEventsAtOnce: number;
}

/** Floors and critical values: docs/decision.md. */
export const DEFAULT_DECISION_RULE: DecisionRule = Object.freeze({
  persistence: 3,
  releaseAfter: 3,
  bodyFloor: 0.05,
  tailFactor: 1.5,
  tailLighterFactor: 0.5,
  tailMinEvents: 10,
  tailMinExpected: 20,
  missingFloor: 0.005,
  missingFactor: 0.5,
  unexpectedMinEvents: 10,
  zPage: 6.5,
  zStrainBelow: 1,
  zRelease: 4,
  zBlock: 2,
  guardFactor: 1.15,
  minExpected: 1,
  minEvents: 50,
  zAtOnce: 10,
  bodyAtOnce: 0.15,
  tailFactorAtOnce: 4,
  tailEventsAtOnce: 25,
});

/** Shares and directions that are looked at in every window: multiplicity within a feature. */
const LOOKS_A_WINDOW = 24;
/** What dependence between looks and the law of z far out ask for on top; fitted to month-long simulations. */
const MARGIN = 0.6;
const LEAST_Z = 5;

/**
 * The |z| that a page asks for when so many windows are decided in a month, over all features, slices and horizons.
 *
 * Definition  Φ⁻¹(1 − 1/(24 N)) + .6, at least 5: about one look in a month would pass by chance, and a margin.
 * Units       N: decided windows a month.
 * Source      Bonferroni's bound; the margin was fitted to simulations (docs/decision.md).
 *
 * @example criticalZ(2.16e7).toFixed(3) // => "6.490"
 */
export function criticalZ(windowsAMonth: number): number {
  const level = 1 / (LOOKS_A_WINDOW * Math.max(1, windowsAMonth));
  return Math.max(LEAST_Z, normalExceededBy(level) + MARGIN);
}
