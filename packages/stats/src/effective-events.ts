/**
 * Effective events of a two-sample comparison: M = 1 / (D/n + D/m), which is nm/(n + m) when D = 1.
 *
 * Units   n, m: events of the two sides; D: design effect (≥ 1), by how much dependence inflates the variance.
 * Edges   0 when either side is empty; tends to m/D when n is far greater than m.
 *
 * @example effectiveEvents(100, 100) // => 50
 */
export function effectiveEvents(n: number, m: number, designEffect = 1): number {
  if (n <= 0 || m <= 0) return 0;
  return (n / (n + m)) * (m / designEffect);
}
