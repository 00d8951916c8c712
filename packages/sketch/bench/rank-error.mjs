// Rank errors against the sorted sample: of a CDF by its knots (strict), and of quantiles (as peers can be asked).

export function countIn(sorted, value, orEqual) {
  let low = 0;
  let high = sorted.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (orEqual ? sorted[middle] <= value : sorted[middle] < value) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** The largest |F̂ − F| at both limits of every value. */
export function supError(sorted, knots) {
  const n = sorted.length;
  let worst = 0;
  let knot = 0;
  for (let i = 0; i < n; ) {
    const value = sorted[i];
    let end = i;
    while (end < n && sorted[end] === value) end++;
    while (knot < knots.values.length && knots.values[knot] < value) knot++;
    const [below, upTo] = limitsAt(knots, knot, value);
    worst = Math.max(worst, Math.abs(below - i), Math.abs(upTo - end));
    i = end;
  }
  return worst / n;
}

function limitsAt(knots, knot, value) {
  if (knot === knots.values.length) return [knots.n, knots.n];
  if (knots.values[knot] === value) return [knots.below[knot], knots.upTo[knot]];
  if (knot === 0) return [0, 0];
  const low = knots.values[knot - 1] / 2;
  const share = (value / 2 - low) / (knots.values[knot] / 2 - low);
  const rank = knots.upTo[knot - 1] + share * (knots.below[knot] - knots.upTo[knot - 1]);
  return [rank, rank];
}

/** 199 ranks, and four in the tails. */
export const RANKS = [...Array.from({ length: 199 }, (_, i) => (i + 1) / 200), 0.0001, 0.001, 0.999, 0.9999];

/** How far rank is from the ranks that the value has in the sample; 0 for an atom that spans it. */
export function rankError(sorted, rank, value) {
  const n = sorted.length;
  const below = countIn(sorted, value, false) / n;
  const upTo = countIn(sorted, value, true) / n;
  return Math.max(0, below - rank, rank - upTo);
}

/** Errors of the quantiles at RANKS: the largest over the 199, and relative to the tail beyond 0.001/0.999 and 0.0001/0.9999. */
export function quantileErrors(sorted, quantiles) {
  const errors = RANKS.map((rank, i) => rankError(sorted, rank, quantiles[i]));
  return {
    sup: Math.max(...errors.slice(0, 199)),
    tail999: Math.max(errors[200], errors[201]) / 0.001,
    tail9999: Math.max(errors[199], errors[202]) / 0.0001,
  };
}
