/**
 * By how much dependence between events inflates the variance of a share: one figure, or one for each rank.
 *
 * Units  1 for independent events; below 1 is read as 1, for a band is never made narrower than independence makes it.
 */
export type DesignEffect = number | ((rank: number) => number);

/** The design effect at a rank, at least 1. */
export function designEffectAt(effect: DesignEffect | undefined, rank: number): number {
  const value = typeof effect === "function" ? effect(rank) : (effect ?? 1);
  return Math.max(1, value);
}
