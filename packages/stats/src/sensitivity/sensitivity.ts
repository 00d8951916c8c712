import type { DecisionGround } from "../decision/decide.js";
import { SHARE_RANKS } from "../decision/evidence.js";
import { LONGEST_SCALE } from "../decision/window-history.js";
import type { NumericSide } from "../numeric-side.js";
import { BELOW_LOWEST, MISSING, WATCHED } from "../sway/watched-counts.js";
import { wassersteinScale } from "../wasserstein-scale.js";
import { type ChangeFamily, type ChangeName, changeFamilies } from "./changes.js";
import { sustainedPower } from "./power.js";

/** The smallest change that pages within a time, with the probability `power`. */
export interface VisibleChange {
  /** Windows that lie wholly in the changed time when it pages. */
  readonly windows: number;
  /** In the feature's unit for a move; a factor for a scale and a tail; a fraction for missing values. */
  readonly size: number;
  /** Over the baseline's robust standard deviation, for a move. */
  readonly inDeviations: number | null;
}

export interface Sensitivity {
  readonly change: ChangeName;
  readonly kind: "move" | "factor" | "share";
  /** By time, quickest first; only times at which more is seen than before. Empty where no such change ever pages. */
  readonly visible: readonly VisibleChange[];
}

export interface SensitivityInput {
  readonly side: NumericSide;
  readonly ground: DecisionGround;
  /** Events of a window, those without a value too. */
  readonly eventsPerWindow: number;
  /** Default .9. */
  readonly power?: number;
}

/**
 * What a feature's monitoring can see: for each kind of change the smallest size that pages, by how long it lasts.
 *
 * Definition  for every scale s: the least size at which some watched share fires with the probability `power` once `persistence` blocks of s windows lie
 *             in the changed time (sustainedPower), found by halving.
 * Shape       a side with finite values; without any only `missing more often` is told.
 * Cost        O(changes · scales · shares · 40) evaluations of a binomial tail: some milliseconds.
 * Source      docs/sensitivity.md
 */
export function sensitivityOf(input: SensitivityInput): readonly Sensitivity[] {
  const scale = input.side.cdf.n === 0 ? null : wassersteinScale(input.side.cdf);
  const families = input.side.cdf.n === 0 ? [] : changeFamilies(input.side.cdf, scale);
  return [...families, MISSING_FAMILY].map((family) => ({
    change: family.name,
    kind: family.kind,
    visible: visibleSizes(family, input, scale),
  }));
}

const DEFAULT_POWER = 0.9;

const MISSING_FAMILY: ChangeFamily = {
  name: "missing more often",
  largest: 1,
  share: (size, _, __, expected) => Math.min(1, expected + size),
  shown: (size) => size,
  kind: "share",
};

function visibleSizes(
  family: ChangeFamily,
  input: SensitivityInput,
  deviation: number | null,
): readonly VisibleChange[] {
  const visible: VisibleChange[] = [];
  let least = Number.POSITIVE_INFINITY;
  for (let scale = 1; scale <= LONGEST_SCALE; scale *= 2) {
    const size = leastSize(family, scale, input);
    if (size === null || size >= least * WORTH_TELLING) continue;
    least = size;
    visible.push({
      windows: scale * input.ground.rule.persistence,
      size: family.shown(size),
      inDeviations: family.kind === "move" && deviation !== null ? size / deviation : null,
    });
  }
  return visible;
}

/** A longer time is told when it sees a change that is smaller by a hundredth at least. */
const WORTH_TELLING = 0.99;
const HALVINGS = 40;

function leastSize(family: ChangeFamily, scale: number, input: SensitivityInput): number | null {
  const wanted = input.power ?? DEFAULT_POWER;
  if (powerAt(family, family.largest, scale, input) < wanted) return null;
  let [low, high] = [0, family.largest];
  for (let step = 0; step < HALVINGS; step += 1) {
    const middle = (low + high) / 2;
    if (powerAt(family, middle, scale, input) >= wanted) high = middle;
    else low = middle;
  }
  return high;
}

function powerAt(family: ChangeFamily, size: number, scale: number, input: SensitivityInput): number {
  const { side, ground, eventsPerWindow } = input;
  const finiteShare = side.events === 0 ? 1 : side.cdf.n / side.events;
  const isMissing = family.name === "missing more often";
  let best = 0;
  for (let share = 0; share < WATCHED; share += 1) {
    // What lies strictly below the lowest threshold is seen there too, or is a filled-in value that no family of change makes.
    if (share === BELOW_LOWEST || (share === MISSING) !== isMissing) continue;
    const expected = ground.tolerance.expected(share, null);
    const changed = family.share(size, ground.thresholds[share] ?? 0, SHARE_RANKS[share] ?? 0, expected);
    const events = share === MISSING ? eventsPerWindow : eventsPerWindow * finiteShare;
    best = Math.max(
      best,
      sustainedPower({ ground, share, expected, changed, scale, eventsPerWindow: events }),
    );
  }
  return best;
}
