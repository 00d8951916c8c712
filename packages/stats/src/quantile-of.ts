import { MoorlineError } from "@moorline/errors";
import type { CdfView } from "./cdf-view.js";
import { firstAtLeast } from "./events-at.js";

/**
 * The value at a rank.
 *
 * Definition  exact view: Hyndman & Fan type 7, x(⌊h⌋) + (h − ⌊h⌋)(x(⌊h⌋+1) − x(⌊h⌋)) with h = (n − 1)·rank counted from 0;
 *             any other view: the inverse of the piecewise-linear CDF, the smallest x with F(x) ≥ rank.
 * Units       rank in [0, 1]; result in the feature's unit.
 * Accuracy    exact view: that of one rounding; else the value at a rank within `rankErrorAt(rank)` of the asked one.
 * Edges       rank 0 → smallest value, rank 1 → greatest; n = 1 → that value.
 * Cost        O(log knots).
 * Source      Hyndman & Fan 1996, doi:10.1080/00031305.1996.10473566; type 7 is the default of R and NumPy.
 *
 * @throws MOORLINE_INPUT_EMPTY_SAMPLE when the view holds no value
 * @throws MOORLINE_INPUT_RANK_RANGE when rank is not in [0, 1]
 * @example quantileOf(cdfOf([1, 2, 3, 4]), 0.5) // => 2.5
 */
export function quantileOf(view: CdfView, rank: number): number {
  if (view.n === 0) throw new MoorlineError("MOORLINE_INPUT_EMPTY_SAMPLE", { statistic: "a quantile" });
  if (!(rank >= 0 && rank <= 1)) throw new MoorlineError("MOORLINE_INPUT_RANK_RANGE", { rank });
  if (!view.exact) return valueAtEvents(view, rank * view.n);
  const position = (view.n - 1) * rank;
  const before = Math.floor(position);
  const fraction = position - before;
  const low = valueAtEvents(view, before + 1);
  if (fraction === 0) return low;
  const high = valueAtEvents(view, before + 2);
  return low === high ? low : (1 - fraction) * low + fraction * high;
}

/**
 * The smallest value with at least `events` events at or below it: for an exact view and a whole number k, the k-th
 * smallest value. Interpolates between knots where the view does.
 */
export function valueAtEvents(view: CdfView, events: number): number {
  const { values, below, upTo } = view;
  const i = Math.min(firstAtLeast(upTo, events), values.length - 1);
  if (view.exact || i === 0 || events >= below[i]!) return values[i]!;
  const from = upTo[i - 1]!;
  const position = (events - from) / (below[i]! - from);
  return (1 - position) * values[i - 1]! + position * values[i]!;
}
