import { MoorlineError } from "@moorline/errors";
import { logFactorial } from "../log-gamma.js";
import { chiSquareExceededBy } from "../special/chi-square.js";

/** What an index shows by chance alone. */
export interface ChanceLevel {
  /** Its mean when nothing changed. */
  readonly expected: number;
  /** What it exceeds in 5 % of comparisons when nothing changed. */
  readonly upper95: number;
  /** The same for 1 %. */
  readonly upper99: number;
}

export interface ChanceLevelInput {
  /** Bins or categories of the index. */
  readonly bins: number;
  /** Events of the baseline. */
  readonly n: number;
  /** Events of production. */
  readonly m: number;
  /** By how much dependence inflates variances, ≥ 1. Default 1. */
  readonly designEffect?: number;
}

/**
 * The stability index that chance alone makes.
 *
 * Definition  D·(1/n + 1/m)·χ² with bins − 1 degrees of freedom.
 * Accuracy    at m = 1,000 within 3 % of the simulated mean; at m = 50 the simulated mean is smaller (.164 against .180), for the index is
 *             smoothed (docs/binned-distances.md).
 * Edges       one bin → 0.
 * Source      Yurdakul & Naranjo 2020, "Statistical properties of the population stability index", Journal of Risk Model Validation 14(4).
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when a side has no event
 * @example populationStabilityNoise({ bins: 1, n: 10, m: 10 }).expected // => 0
 */
export function populationStabilityNoise(input: ChanceLevelInput): ChanceLevel {
  const unit = unitOf(input);
  const df = Math.max(0, input.bins - 1);
  return {
    expected: unit * df,
    upper95: unit * chiSquareExceededBy(0.05, df),
    upper99: unit * chiSquareExceededBy(0.01, df),
  };
}

/**
 * The Jensen–Shannon distance that chance alone makes.
 *
 * Definition  √(D·(1/n + 1/m)/(8 ln 2))·χ with bins − 1 degrees of freedom; its mean is √2·Γ(bins/2)/Γ((bins − 1)/2) of that unit.
 * Accuracy    within 2 % of the simulated mean from ten events a bin on (.0394 at m = 1,000 and ten bins). At most 1.
 * Edges       one bin → 0.
 * Source      second-order expansion of Lin 1991, doi:10.1109/18.61115.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when a side has no event
 * @example jensenShannonNoise({ bins: 1, n: 10, m: 10 }).expected // => 0
 */
export function jensenShannonNoise(input: ChanceLevelInput): ChanceLevel {
  const unit = Math.sqrt(unitOf(input) / (8 * Math.LN2));
  const df = Math.max(0, input.bins - 1);
  const quantile = (probability: number) =>
    Math.min(1, unit * Math.sqrt(chiSquareExceededBy(probability, df)));
  return {
    expected: Math.min(1, unit * meanOfChi(df)),
    upper95: quantile(0.05),
    upper99: quantile(0.01),
  };
}

function unitOf({ n, m, designEffect = 1 }: ChanceLevelInput): number {
  if (n > 0 && m > 0) return designEffect * (1 / n + 1 / m);
  throw new MoorlineError("MOORLINE_INPUT_STATISTIC_DOMAIN", {
    name: "the number of events",
    value: Math.min(n, m),
    domain: "above 0 on both sides",
  });
}

function meanOfChi(df: number): number {
  if (df === 0) return 0;
  // Γ((df + 1)/2)/Γ(df/2) by the logarithms of Γ(z + 1) = zΓ(z).
  const half = df / 2;
  return Math.SQRT2 * half * Math.exp(logFactorial(half - 0.5) - logFactorial(half));
}
