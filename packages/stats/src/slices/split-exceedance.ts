import type { CdfView } from "../cdf-view.js";
import { eventsAt } from "../events-at.js";
import { type SlicePart, type SliceSides, sliceWeights } from "./split-distance.js";

export interface ExceedanceSplit {
  /** Production's share above the threshold less the baseline's, of the two mixtures. */
  readonly change: number;
  /** By slice, in the order given; sums to the change. */
  readonly parts: readonly SlicePart[];
}

/**
 * Splits the change of a share above a threshold into what each slice adds.
 *
 * Definition  with e the shares above: within_s = (w_s + v_s)/2·(e′_s − e_s), mix_s = (v_s − w_s)·((e′_s + e_s)/2 − (e′ + e)/2).
 * Shape, Edges as in splitDistance.
 */
export function splitExceedance(slices: readonly SliceSides[], threshold: number): ExceedanceSplit {
  const { baseline: w, production: v } = sliceWeights(slices);
  const above = (view: CdfView) => (view.n === 0 ? null : 1 - eventsAt(view, threshold).upTo / view.n);
  const before = slices.map((one) => above(one.baseline));
  const now = slices.map((one) => above(one.production));
  const whole = (weights: readonly number[], shares: readonly (number | null)[]) =>
    shares.reduce((sum: number, share, s) => sum + (weights[s]! > 0 ? weights[s]! * (share ?? 0) : 0), 0);
  const [e, f] = [whole(w, before), whole(v, now)];
  return {
    change: f - e,
    parts: slices.map((_, s) => {
      const [es, fs] = [before[s] ?? e, now[s] ?? f];
      return {
        within: ((w[s]! + v[s]!) / 2) * (fs - es),
        mix: (v[s]! - w[s]!) * ((fs + es) / 2 - (f + e) / 2),
      };
    }),
  };
}
