import type { CdfView } from "./cdf-view.js";
import { eventsAt } from "./events-at.js";
import { quantileOf } from "./quantile-of.js";

/** Events of both sides in one bin. */
export interface BinCount {
  readonly baseline: number;
  readonly production: number;
}

const DECILES = [0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9];

/**
 * Both samples counted in bins cut at the baseline's deciles.
 *
 * Definition  bins (previous edge, edge]; equal edges are merged, and the value at which two or more deciles meet, an atom of at least a
 *             tenth, has a bin of its own.
 * Shape       both views hold at least one value; at most 10 bins without atoms; bins empty on both sides are left out.
 * Edges       a constant baseline gives three bins: below, at, above.
 */
export function decileBins(baseline: CdfView, production: CdfView): readonly BinCount[] {
  const bins: BinCount[] = [];
  let before = { baseline: 0, production: 0 };
  const closeAt = (upTo: { readonly baseline: number; readonly production: number }) => {
    const bin = {
      baseline: Math.max(0, upTo.baseline - before.baseline),
      production: Math.max(0, upTo.production - before.production),
    };
    if (bin.baseline + bin.production > 0) bins.push(bin);
    before = upTo;
  };
  for (const { value, repeated } of edgesOf(baseline)) {
    const a = eventsAt(baseline, value);
    const b = eventsAt(production, value);
    if (repeated) closeAt({ baseline: a.below, production: b.below });
    closeAt({ baseline: a.upTo, production: b.upTo });
  }
  closeAt({ baseline: baseline.n, production: production.n });
  return bins;
}

function edgesOf(baseline: CdfView): readonly { readonly value: number; readonly repeated: boolean }[] {
  const edges: { value: number; repeated: boolean }[] = [];
  for (const rank of DECILES) {
    const value = quantileOf(baseline, rank);
    const last = edges.at(-1);
    if (last?.value === value) last.repeated = true;
    else edges.push({ value, repeated: false });
  }
  return edges;
}
