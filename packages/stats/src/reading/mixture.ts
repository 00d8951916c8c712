import { eventsAt } from "../events-at.js";
import { GRID_RANKS } from "../grid-ranks.js";
import { quantileOf } from "../quantile-of.js";
import type { Pattern } from "./pattern.js";
import { medianOf, type PatternContext, zBetween } from "./pattern-context.js";
import { middleShare, mirroredView } from "./view-shape.js";

/** Ranks of one half that a population moved away from must keep their proportions at. */
const HALF = GRID_RANKS.filter((rank) => rank >= 0.02 && rank <= 0.5);
const FITS_BELOW = 35;
const BETTER_BY = 10;
const LEAST_SHARE = 0.05;
/** Beyond this it is the population that moved, not a part of it. */
const MOST_SHARE = 0.6;

/** Part of the events moved away, the rest is as it was: one half of the distribution keeps its proportions. */
export function mixtureRule(context: PatternContext): Pattern | null {
  const upward = halfKept(context, false);
  const downward = halfKept(context, true);
  // Where both halves kept theirs nothing was moved out of either.
  if ((upward === null) === (downward === null)) return null;
  const share = (upward ?? downward)!;
  const beyond = upward === null ? share / 2 : 1 - share / 2;
  return {
    kind: "mixture",
    figures: { share, at: quantileOf(context.production, beyond), upper: upward === null ? 0 : 1 },
  };
}

/** Share of the events that left one half, or null. */
function halfKept(context: PatternContext, mirrored: boolean): number | null {
  const { effective, m, median, scale, line } = context;
  const rankErrorAt = (rank: number) => context.rankErrorAt(mirrored ? 1 - rank : rank);
  const side = (view: PatternContext["baseline"]) => (mirrored ? mirroredView(view) : view);
  const [baseline, production] = [side(context.baseline), side(context.production)];
  const center = mirrored ? -median : median;
  const a = mirrored ? -line.a : line.a;
  const at = HALF.map((rank) => {
    const value = quantileOf(baseline, rank);
    const unfitted = center + (scale * ((value - center) / scale - a)) / line.b;
    return {
      expected: middleShare(baseline, value),
      observed: middleShare(production, value),
      affine: eventsAt(baseline, unfitted).upTo / baseline.n,
    };
  });
  const kept = medianOf(at.map(({ observed, expected }) => observed / expected));
  const share = 1 - kept;
  if (share < Math.max(LEAST_SHARE, 3 * Math.sqrt(0.5 / m)) || share > MOST_SHARE) return null;
  const sum = (z: (one: (typeof at)[number]) => number) => at.reduce((total, one) => total + z(one) ** 2, 0);
  const fits = sum(({ observed, expected }) =>
    zBetween(observed, kept * expected, effective, rankErrorAt(expected)),
  );
  const affine = sum(({ expected, observed, affine: share_ }) =>
    zBetween(observed, share_, effective, rankErrorAt(expected)),
  );
  return fits <= FITS_BELOW && affine - fits >= BETTER_BY ? share : null;
}
