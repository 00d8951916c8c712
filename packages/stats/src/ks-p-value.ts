import { MoorlineError } from "@moorline/errors";
import type { CdfView } from "./cdf-view.js";
import { effectiveEvents } from "./effective-events.js";
import { ksPValueExact } from "./ks-p-value-exact.js";

/** The exact law is counted up to this product of the sample sizes; R's own switch for two samples. */
export const EXACT_UP_TO = 10_000;

export interface KsPValueInput {
  readonly distance: number;
  readonly n: number;
  readonly m: number;
  readonly designEffect?: number;
  /** The two samples, for their ties. Without them, or when one is not exact, the limit law is used. */
  readonly samples?: readonly [baseline: CdfView, production: CdfView];
}

/**
 * p-value of a two-sample Kolmogorov–Smirnov distance, two-sided.
 *
 * Definition  exact and conditional on the ties where n·m ≤ 10,000, both samples are exact and D = 1; else P(K > λ) with Stephens'
 *             λ = (√M + .12 + .11/√M)·D, K Kolmogorov's limit law and M the effective events.
 * Units       a probability.
 * Accuracy    of Stephens' form: size .047–.056 for a nominal .05 from 15 against 12 values on (docs/ks-p-value.md); ties make
 *             it conservative.
 * Edges       D = 0 → 1; disjoint large samples → the smallest double above 0 or 0.
 * Source      Stephens 1970, doi:10.1111/j.2517-6161.1970.tb00821.x; Schröer & Trenkler 1995,
 *             doi:10.1016/0167-9473(94)00040-P (exact, with ties).
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when the distance is not in [0, 1]
 * @example ksPValue({ distance: 0, n: 1000, m: 1000 }) // => 1
 */
export function ksPValue(input: KsPValueInput): number {
  const { distance, n, m, designEffect = 1, samples } = input;
  if (samples?.[0].exact && samples[1].exact && designEffect === 1 && n * m <= EXACT_UP_TO) {
    return ksPValueExact(distance, samples[0], samples[1]);
  }
  const root = Math.sqrt(effectiveEvents(n, m, designEffect));
  if (root === 0) return 1;
  return kolmogorovTail((root + 0.12 + 0.11 / root) * checked(distance));
}

/**
 * The plain limit law, without Stephens' correction: P(K > √M·D). What R prints for large samples; conservative below
 * M of about 200. For checks against other programs.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when the distance is not in [0, 1]
 */
export function ksPValueAsymptotic(distance: number, n: number, m: number): number {
  return kolmogorovTail(Math.sqrt(effectiveEvents(n, m)) * checked(distance));
}

/**
 * Upper tail of Kolmogorov's limit law, P(K > λ).
 *
 * Definition  2 Σ (−1)^(j−1) exp(−2 j² λ²); below λ = 1.18 its theta-transformed twin, which converges there.
 * Accuracy    1e-15 absolute, and relative in the far tail.
 * Edges       λ ≤ 0 → 1.
 * Source      Kolmogorov 1933; Smirnov 1948, doi:10.1214/aoms/1177730256.
 */
export function kolmogorovTail(lambda: number): number {
  if (lambda <= 0) return 1;
  if (lambda < 1.18) {
    const factor = -(Math.PI * Math.PI) / (8 * lambda * lambda);
    let sum = 0;
    for (let odd = 1; odd <= 9; odd += 2) sum += Math.exp(odd * odd * factor);
    return Math.min(1, 1 - (Math.sqrt(2 * Math.PI) / lambda) * sum);
  }
  let tail = 0;
  for (let j = 6; j >= 1; j -= 1) tail = Math.exp(-2 * j * j * lambda * lambda) - tail;
  // The loop leaves e₁ − e₂ + e₃ − …: each pass subtracts what the later terms amount to.
  return 2 * tail;
}

function checked(distance: number): number {
  if (distance >= 0 && distance <= 1) return distance;
  throw new MoorlineError("MOORLINE_INPUT_STATISTIC_DOMAIN", {
    name: "the Kolmogorov–Smirnov distance",
    value: distance,
    domain: "0 to 1",
  });
}
