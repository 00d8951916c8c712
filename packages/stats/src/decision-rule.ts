/** How far from the baseline a window may be, and for how long, before it counts. */
export interface DecisionRule {
  /** Consecutive windows beyond tolerance, at one place in one direction, before a feature is adrift. */
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
  /** Pooled over the windows beyond tolerance, |z| must reach this before a feature is adrift. */
  readonly zPage: number;
  /** In each of these windows |z| must reach this. */
  readonly zWindow: number;
  /** Pooled |z| from which a share beyond tolerance shows as straining: the 95 % band of all ranks together. */
  readonly zStrain: number;
  /** Effective events (nm/(n + m)) below which a window is too thin to tell. */
  readonly minEvents: number;
  /** One window this far out is enough by itself … */
  readonly zAtOnce: number;
  /** … when the body's share moved by this much … */
  readonly bodyAtOnce: number;
  /** … or a tail's share grew by this factor … */
  readonly tailFactorAtOnce: number;
  /** … with this many events beyond the threshold. */
  readonly tailEventsAtOnce: number;
  /** Design effect D ≥ 1: by how much dependence between events inflates the variance. 1 until it is learnt from the baseline's blocks. */
  readonly designEffect: number;
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
  zPage: 6.5,
  zWindow: 2,
  zStrain: 3.018,
  minEvents: 50,
  zAtOnce: 10,
  bodyAtOnce: 0.15,
  tailFactorAtOnce: 4,
  tailEventsAtOnce: 25,
  designEffect: 1,
});
