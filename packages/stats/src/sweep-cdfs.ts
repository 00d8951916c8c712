import type { CdfView } from "./cdf-view.js";
import { eventsUpTo } from "./walk-union.js";

/** What one pass over the union of two CDFs' knots yields. */
export interface CdfSweep {
  /** Greatest absolute difference of the two CDFs over all one-sided limits. */
  readonly distance: number;
  /** The first knot at which it is reached. */
  readonly at: number;
  /** Sign of production's CDF minus the baseline's there; 0 when the CDFs are the same. */
  readonly sign: number;
  /** Area between the two CDFs; at most Number.MAX_VALUE. */
  readonly area: number;
}

/**
 * One pass over the union of the knots of two CDFs: Kolmogorov–Smirnov and Wasserstein-1 together.
 *
 * Definition  the difference d = G − F is linear between two neighbouring knots of the union, so its extremes lie at the knots' one-sided
 *             limits, and the area of a piece of width h from d₀ to d₁ is h(|d₀| + |d₁|)/2, or h(d₀² + d₁²)/(2(|d₀| + |d₁|)) when d changes sign.
 * Shape       both views hold at least one value.
 * Cost        O(knots of both) time, no allocation.
 */
export function sweepCdfs(baseline: CdfView, production: CdfView): CdfSweep {
  const { values: av, below: ab, upTo: au, n: an } = baseline;
  const { values: bv, below: bb, upTo: bu, n: bn } = production;
  const [aEnd, bEnd] = [av.length, bv.length];
  // Over the common denominator: for exact views the numerators are whole, so the distance has one rounding.
  const pairs = an * bn;
  const share = 1 / pairs;
  let i = 0;
  let j = 0;
  let greatest = 0;
  let at = Math.min(av[0]!, bv[0]!);
  let sign = 0;
  let area = 0;
  let previousX = at;
  let previous = 0;
  while (i < aEnd || j < bEnd) {
    const a = i < aEnd ? av[i]! : Number.POSITIVE_INFINITY;
    const b = j < bEnd ? bv[j]! : Number.POSITIVE_INFINITY;
    const x = Math.min(a, b);
    let left: number;
    let right: number;
    if (a === b) {
      left = bb[j]! * an - ab[i]! * bn;
      right = bu[j]! * an - au[i]! * bn;
      i += 1;
      j += 1;
    } else if (a < b) {
      const between = eventsUpTo(bv, bb, bu, j, x) * an;
      left = between - ab[i]! * bn;
      right = between - au[i]! * bn;
      i += 1;
    } else {
      const between = eventsUpTo(av, ab, au, i, x) * bn;
      left = bb[j]! * an - between;
      right = bu[j]! * an - between;
      j += 1;
    }
    const further = Math.abs(right) > Math.abs(left) ? right : left;
    if (Math.abs(further) > greatest) {
      greatest = Math.abs(further);
      at = x;
      sign = Math.sign(further);
    }
    const height = left * share;
    area += pieceArea(previousX, x, previous, height);
    previousX = x;
    previous = right * share;
  }
  return { distance: greatest / pairs, at, sign, area: Math.min(area, Number.MAX_VALUE) };
}

/** Area under the absolute value of a line from (x0, d0) to (x1, d1). Free of overflow but for an area that has none. */
export function pieceArea(x0: number, x1: number, d0: number, d1: number): number {
  const total = Math.abs(d0) + Math.abs(d1);
  if (total === 0 || x0 === x1) return 0;
  if (total === Number.POSITIVE_INFINITY) return Number.MAX_VALUE;
  const part = d0 < 0 === d1 < 0 ? 1 : squaredParts(Math.abs(d0) / total);
  const height = (total / 2) * part;
  const width = x1 - x0;
  // Two values further apart than the greatest double: halve before subtracting, double after weighting.
  return Number.isFinite(width) ? width * height : (x1 / 2 - x0 / 2) * height * 2;
}

/** A line that crosses zero encloses two triangles: of its height's parts r and 1 − r, r² + (1 − r)² of the rectangle. */
function squaredParts(r: number): number {
  return r * r + (1 - r) * (1 - r);
}
