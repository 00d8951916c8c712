import type { BinCount } from "../decile-bins.js";
import { effectiveEvents } from "../effective-events.js";

export interface TotalVariation {
  /** ½ Σ |a − e|: the least share of events that would have to change category. */
  readonly distance: number;
  /** What chance alone makes of it on average. */
  readonly noise: number;
  /** distance − noise, or 0: so much has changed at the least, on average. */
  readonly beyondNoise: number;
}

/**
 * Total variation distance over given bins, with the noise that it stands on.
 *
 * Definition  ½ Σ |a − e| over the shares of both sides; noise ½ Σ √(2/π)·√(h(1 − h)/M), h the pooled share. As E|N(δ, σ)| ≤ |δ| + √(2/π)·σ, the
 *             true distance is on average at least what is left of the observed one.
 * Shape       both sides hold events.
 * Units       shares in [0, 1].
 * Accuracy    noise within 5 % of the simulated mean where every bin expects 5 events (test/categorical).
 * Edges       identical shares → 0; no bin in common → 1; one bin → 0 and noise 0.
 *
 * @example totalVariation([{ baseline: 2, production: 0 }, { baseline: 0, production: 3 }]).distance // => 1
 */
export function totalVariation(bins: readonly BinCount[], designEffect = 1): TotalVariation {
  const n = bins.reduce((sum, bin) => sum + bin.baseline, 0);
  const m = bins.reduce((sum, bin) => sum + bin.production, 0);
  const perEvent = Math.sqrt(2 / Math.PI / effectiveEvents(n, m, designEffect));
  let distance = 0;
  let noise = 0;
  for (const { baseline, production } of bins) {
    distance += Math.abs(production / m - baseline / n) / 2;
    const pooled = (baseline + production) / (n + m);
    noise += (perEvent * Math.sqrt(pooled * (1 - pooled))) / 2;
  }
  const within = Math.min(1, distance);
  return { distance: within, noise, beyondNoise: Math.max(0, within - noise) };
}
