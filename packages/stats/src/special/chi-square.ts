import { gammaTails, gammaUpperQuantile } from "./incomplete-gamma.js";

/**
 * Upper tail of the chi-square distribution, P(χ²_df ≥ x).
 *
 * Accuracy    relative 1e-12, also far out in the tail.
 * Edges       x ≤ 0 → 1; df = 0 (nothing that could differ) → 1 for x ≤ 0, else 0.
 * Source      DLMF 8.2, https://dlmf.nist.gov/8.2: Q(df/2, x/2).
 *
 * @example chiSquareTail(0, 3) // => 1
 */
export function chiSquareTail(x: number, df: number): number {
  if (x <= 0) return 1;
  return df <= 0 ? 0 : gammaTails(df / 2, x / 2).upper;
}

/**
 * The x that a chi-square variable exceeds with the given probability.
 *
 * Accuracy    relative 1e-12.
 * Edges       probability 1 → 0; df = 0 → 0.
 *
 * @example chiSquareExceededBy(1, 4) // => 0
 */
export function chiSquareExceededBy(probability: number, df: number): number {
  return df <= 0 ? 0 : 2 * gammaUpperQuantile(probability, df / 2);
}
