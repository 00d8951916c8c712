import type { CdfKnots } from "../../src/index.js";

/** Events < value (`below`) or ≤ value (`upTo`) of a sorted sample, by counting. */
export function countIn(sorted: Float64Array, value: number, side: "below" | "upTo"): number {
  let low = 0;
  let high = sorted.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (side === "upTo" ? sorted[middle]! <= value : sorted[middle]! < value) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Type 7 of Hyndman & Fan (1996), from the definition. */
export function type7(sorted: Float64Array, rank: number): number {
  const place = (sorted.length - 1) * rank;
  const low = sorted[Math.floor(place)]!;
  const high = sorted[Math.ceil(place)]!;
  return low + (place - Math.floor(place)) * (high - low);
}

/**
 * The largest |F̂ − F|, as a fraction: at both limits of every value of the sorted sample. Between two values F is constant and
 * F̂ rises, so that the largest difference is at a value.
 */
export function supError(sorted: Float64Array, knots: CdfKnots): number {
  const n = sorted.length;
  let worst = 0;
  let knot = 0;
  for (let i = 0; i < n; ) {
    const value = sorted[i]!;
    let end = i;
    while (end < n && sorted[end] === value) end++;
    while (knot < knots.values.length && knots.values[knot]! < value) knot++;
    const [below, upTo] = limitsAt(knots, knot, value);
    worst = Math.max(worst, Math.abs(below - i), Math.abs(upTo - end));
    i = end;
  }
  return worst / n;
}

function limitsAt(knots: CdfKnots, knot: number, value: number): [number, number] {
  if (knot === knots.values.length) return [knots.n, knots.n];
  if (knots.values[knot] === value) return [knots.below[knot]!, knots.upTo[knot]!];
  if (knot === 0) return [0, 0];
  const low = knots.values[knot - 1]! / 2;
  const share = (value / 2 - low) / (knots.values[knot]! / 2 - low);
  const rank = knots.upTo[knot - 1]! + share * (knots.below[knot]! - knots.upTo[knot - 1]!);
  return [rank, rank];
}
