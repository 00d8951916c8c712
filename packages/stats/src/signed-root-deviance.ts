import { MoorlineError } from "@moorline/errors";

/**
 * Signed root of the binomial deviance: how many standard deviations an observed share lies from the expected one.
 *
 * Definition  z = sign(g − e)·√(2M·(g ln(g/e) + (1 − g) ln((1 − g)/(1 − e)))), with 0·ln 0 = 0.
 * Units       g, e: shares, g in [0, 1], e in (0, 1); M: effective events, ≥ 0; z: standard deviations.
 * Accuracy    as a normal deviate good to about 6 sd even where only one event is expected (measured).
 * Edges       g = e → 0; g = 0 and g = 1 finite; M = 0 → 0.
 * Source      Berk & Jones 1979, doi:10.1007/BF00533250.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when a share or M is outside its domain
 * @example signedRootDeviance(0.5, 0.5, 100) // => 0
 */
export function signedRootDeviance(observed: number, expected: number, effective: number): number {
  requireWithin("the observed share", observed, observed >= 0 && observed <= 1, "0 to 1");
  requireWithin("the expected share", expected, expected > 0 && expected < 1, "0 to 1, ends excluded");
  requireWithin("the effective event count", effective, effective >= 0, "0 and above");
  const root = Math.sqrt(2 * effective * relativeEntropy(observed, expected));
  return observed < expected ? -root : root;
}

/** Relative entropy of a Bernoulli(g) to a Bernoulli(e), never below 0 (rounding could bring it there near g = e). */
export function relativeEntropy(g: number, e: number): number {
  const below = g === 0 ? 0 : g * Math.log(g / e);
  const above = g === 1 ? 0 : (1 - g) * Math.log((1 - g) / (1 - e));
  return Math.max(0, below + above);
}

function requireWithin(name: string, value: number, holds: boolean, domain: string): void {
  if (!holds) throw new MoorlineError("MOORLINE_INPUT_STATISTIC_DOMAIN", { name, value, domain });
}
