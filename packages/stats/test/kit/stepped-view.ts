import type { CdfView } from "../../src/cdf-view.js";

/** A view whose slopes are cut into steps, by pieces of the same number of events. */
export function stepped(view: CdfView, pieces: number): CdfView {
  const knots: [value: number, below: number, upTo: number][] = [];
  for (let i = 0; i < view.values.length; i += 1) {
    knots.push([view.values[i]!, view.below[i]!, view.upTo[i]!]);
    if (i + 1 === view.values.length) break;
    const count = Math.ceil((pieces * (view.below[i + 1]! - view.upTo[i]!)) / view.n);
    for (let k = 0; k < count; k += 1) {
      const at = (share: number) => view.upTo[i]! + (view.below[i + 1]! - view.upTo[i]!) * share;
      const x = view.values[i]! + ((view.values[i + 1]! - view.values[i]!) * (k + 0.5)) / count;
      knots.push([x, at(k / count), at((k + 1) / count)]);
    }
  }
  return {
    ...view,
    values: Float64Array.from(knots, ([x]) => x),
    below: Float64Array.from(knots, ([, below]) => below),
    upTo: Float64Array.from(knots, ([, , upTo]) => upTo),
  };
}
