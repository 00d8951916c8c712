import type { CdfView } from "../cdf-view.js";
import { normalExceededBy } from "../special/normal.js";
import { wasserstein1 } from "../wasserstein1.js";
import { type WassersteinChangeOptions, wassersteinError } from "./wasserstein-error.js";
import { wassersteinNoise } from "./wasserstein-noise.js";

export interface WassersteinChange {
  /** In the feature's unit, over the ranks asked for. */
  readonly distance: number;
  /** What chance alone makes of it on average, in the feature's unit. */
  readonly noise: number;
  /** Whether the distance is more than chance makes in about 1 % of comparisons. */
  readonly aboveNoise: boolean;
  /** 95 % interval of the distance; null where the distance is not above noise, for it is then mostly noise. */
  readonly interval: readonly [low: number, high: number] | null;
}

/** Times the mean noise: 99 % of distances without a change lie below 1.6 to 2.4 times (tail: 2.3 to 4.0 times) of it. */
const ABOVE_NOISE = { all: 2.4, part: 3.6 } as const;

/**
 * A Wasserstein-1 distance with the noise that it stands on.
 *
 * Definition  above noise when W₁ > 2.4 · noise, over a part of the ranks 3.6 · noise; interval W₁ ± 1.96·SE (see `wassersteinError`), cut at 0.
 * Shape       both views hold at least one value.
 * Accuracy    coverage of the interval for the nominal .95: .91–.99 for changes well above noise, down to .85 where few draws are above it: those
 *             overstate (docs/wasserstein-noise.md).
 * Edges       constant baseline and another value → noise 0, above noise, interval of no width.
 * Cost        O(knots of both).
 * Source      del Barrio, Giné & Matrán 1999, doi:10.1214/aop/1022677394.
 *
 * @throws MOORLINE_INPUT_EMPTY_SAMPLE when a side has no value
 * @example wassersteinChange(cdfOf([1, 2]), cdfOf([1, 2])).aboveNoise // => false
 */
export function wassersteinChange(
  baseline: CdfView,
  production: CdfView,
  { range, designEffect = 1 }: WassersteinChangeOptions = {},
): WassersteinChange {
  const part = range === undefined ? {} : { range };
  const distance = wasserstein1(baseline, production, range);
  const noise = wassersteinNoise({ baseline, m: production.n, designEffect, ...part });
  const aboveNoise = distance > (range === undefined ? ABOVE_NOISE.all : ABOVE_NOISE.part) * noise;
  if (!aboveNoise) return { distance, noise, aboveNoise, interval: null };
  const half = normalExceededBy(0.025) * wassersteinError(baseline, production, { designEffect, ...part });
  const interval = [Math.max(0, distance - half), Math.min(distance + half, Number.MAX_VALUE)] as const;
  return { distance, noise, aboveNoise, interval };
}
