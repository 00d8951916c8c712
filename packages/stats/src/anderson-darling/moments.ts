/**
 * Variance of the k-sample Anderson–Darling statistic when all samples come from one law; its mean is k − 1.
 *
 * Definition  (aN³ + bN² + cN + d)/((N − 1)(N − 2)(N − 3)), a to d from k, H = Σ 1/n_i, h = Σ_{i<N} 1/i and
 *             g = Σ_{i≤N−2} Σ_{i<j<N} 1/((N − i)j); g is Σ_{i<N} 1/i² − 2h/N, so that nothing is summed over events.
 * Shape       sizes: at least two, each > 0, not necessarily whole (a design effect divides them); N their sum.
 * Edges       null when N ≤ 3: no variance is defined.
 * Source      Scholz & Stephens 1987, doi:10.1080/01621459.1987.10478517, equation 4.
 */
export function andersonDarlingVariance(sizes: readonly number[]): number | null {
  const k = sizes.length;
  const n = sizes.reduce((sum, size) => sum + size, 0);
  if (!(n > 3)) return null;
  const inverse = sizes.reduce((sum, size) => sum + 1 / size, 0);
  const h = harmonic(n - 1);
  const g = harmonicOfSquares(n - 1) - (2 * h) / n;
  const a = (4 * g - 6) * (k - 1) + (10 - 6 * g) * inverse;
  const b = (2 * g - 4) * k * k + 8 * h * k + (2 * g - 14 * h - 4) * inverse - 8 * h + 4 * g - 6;
  const c = (6 * h + 2 * g - 2) * k * k + (4 * h - 4 * g + 6) * k + (2 * h - 6) * inverse + 4 * h;
  const d = (2 * h + 6) * k * k - 4 * h * k;
  // Divided through by N³: the terms of 10⁹ events would otherwise pass what a double tells apart.
  return (a + (b + (c + d / n) / n) / n) / ((1 - 1 / n) * (1 - 2 / n) * (1 - 3 / n));
}

/** From here the asymptotic series has 16 digits. */
const SERIES_FROM = 12;
const EULER_GAMMA = 0.5772156649015329;

/** 1 + 1/2 + … + 1/x, continued to real x > 0 (DLMF 5.11.2). */
function harmonic(x: number): number {
  let z = x;
  let sum = 0;
  while (z < SERIES_FROM) {
    z += 1;
    sum -= 1 / z;
  }
  const s = 1 / (z * z);
  return (
    sum +
    Math.log(z) +
    EULER_GAMMA +
    1 / (2 * z) -
    s * (1 / 12 - s * (1 / 120 - s * (1 / 252 - s * (1 / 240 - s / 132))))
  );
}

/** 1 + 1/4 + … + 1/x², continued to real x > 0 (DLMF 5.15.8). */
function harmonicOfSquares(x: number): number {
  let z = x;
  let sum = 0;
  while (z < SERIES_FROM) {
    z += 1;
    sum -= 1 / (z * z);
  }
  const s = 1 / (z * z);
  const rest = 1 / z - s / 2 + (s / z) * (1 / 6 - s * (1 / 30 - s * (1 / 42 - s * (1 / 30 - (5 * s) / 66))));
  return sum + (Math.PI * Math.PI) / 6 - rest;
}
