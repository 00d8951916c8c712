const LOWER_HALF = [0.001, 0.0025, 0.005, 0.01, 0.02, 0.03, 0.05, 0.075, 0.1, 0.15, 0.2, 0.25, 0.3, 0.4];
const UPPER_HALF = [0.6, 0.7, 0.75, 0.8, 0.85, 0.9, 0.925, 0.95, 0.97, 0.98, 0.99, 0.995, 0.9975, 0.999];

/** The 29 ranks of quantile pairs: dense in both tails, symmetric about the median. Part of the output contract. */
export const GRID_RANKS: readonly number[] = Object.freeze([...LOWER_HALF, 0.5, ...UPPER_HALF]);

/** The 11 ranks whose baseline values are frozen as thresholds; every one is a rank of the grid. */
export const FROZEN_RANKS: readonly number[] = Object.freeze([
  0.001, 0.01, 0.05, 0.1, 0.25, 0.5, 0.75, 0.9, 0.95, 0.99, 0.999,
]);

/** Which part of a distribution a frozen rank speaks for: below .1 the lower tail, above .9 the upper, else the body. */
export function partOfRank(rank: number): "lower tail" | "body" | "upper tail" {
  if (rank < 0.1) return "lower tail";
  return rank > 0.9 ? "upper tail" : "body";
}
