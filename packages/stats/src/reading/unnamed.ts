import { GRID_RANKS } from "../grid-ranks.js";
import type { Pattern } from "./pattern.js";
import type { PatternContext } from "./pattern-context.js";

/** Below so many effective events, or with weaker evidence, a shape without a name may be a pattern that n does not show. */
const ENOUGH_EVENTS = 1_000;
const STRONG = 6;

/** Something differs, and no rule names it: a change of shape where the evidence is strong, else `cannot tell`. */
export function unnamed({ z, x, y, median, scale, effective }: PatternContext): Pattern {
  let at = 0;
  for (const [i, one] of z.entries()) if (Math.abs(one) > Math.abs(z[at]!)) at = i;
  const figures = {
    rank: GRID_RANKS[at]!,
    z: z[at]!,
    before: median + scale * x[at]!,
    now: median + scale * y[at]!,
  };
  const isStrong = effective >= ENOUGH_EVENTS && Math.abs(z[at]!) >= STRONG;
  return { kind: isStrong ? "shape" : "cannot tell", figures };
}
