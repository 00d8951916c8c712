import type { CdfView } from "../cdf-view.js";

/**
 * The view with every value spread evenly to half way to its neighbours. Counts, ratings and rounded readings jump; where a line that was laid through the pairs
 * falls between two of their values, a whole jump lies on one side or the other, and a mere move would look like a tail.
 */
export function smoothedView(view: CdfView): CdfView {
  const { n, values, upTo } = view;
  if (values.length < 2) return view;
  const last = values.length - 1;
  const knots = new Float64Array(values.length + 1);
  const events = new Float64Array(values.length + 1);
  knots[0] = values[0]! - (values[1]! - values[0]!) / 2;
  for (let i = 0; i < last; i += 1) {
    knots[i + 1] = values[i]! + (values[i + 1]! - values[i]!) / 2;
    events[i + 1] = upTo[i]!;
  }
  knots[last + 1] = values[last]! + (values[last]! - values[last - 1]!) / 2;
  events[last + 1] = n;
  // Neighbours one rounding apart have no value half way.
  for (let i = 1; i < knots.length; i += 1) if (!(knots[i]! > knots[i - 1]!)) return view;
  return { ...view, values: knots, below: events, upTo: events, exact: false };
}
