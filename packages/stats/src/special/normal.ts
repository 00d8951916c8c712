import { gammaTails, gammaUpperQuantile } from "./incomplete-gamma.js";

/**
 * Probability that a standard normal variable exceeds z.
 *
 * Accuracy    relative 1e-13, also far out in the tail (Q(½, z²/2)/2).
 * Edges       z = 0 → ½.
 *
 * @example normalTail(0) // => 0.5
 */
export function normalTail(z: number): number {
  const tails = gammaTails(0.5, (z * z) / 2);
  return z < 0 ? (1 + tails.lower) / 2 : tails.upper / 2;
}

/** Probability that a standard normal variable lies at least |z| from 0. */
export function normalTwoSided(z: number): number {
  return gammaTails(0.5, (z * z) / 2).upper;
}

/** The z that a standard normal variable exceeds with a probability of at most ½: 0.025 → 1.96. */
export function normalExceededBy(probability: number): number {
  return Math.sqrt(2 * gammaUpperQuantile(2 * probability, 0.5));
}
