import { MoorlineError } from "@moorline/errors";
import { NumericSketch } from "@moorline/sketch";
import type { NumericSide } from "@moorline/stats";
import type { BaselinePart, Store } from "@moorline/store";
import { WHOLE } from "./baseline-parts.js";
import { OWN_THRESHOLDS } from "./own-thresholds.js";

/** The whole of a baseline for one feature, as a side of a comparison. */
export interface BaselineSide {
  readonly side: NumericSide;
  /** The slice that it is of: the one asked for, or `all` where the baseline has no part for that. */
  readonly slice: string;
  readonly fallsBack: boolean;
}

/**
 * Loads the side that production is held against.
 *
 * @throws MOORLINE_STATE_BASELINE_PART when the baseline has nothing of the feature
 */
export async function loadBaselineSide(
  store: Store,
  id: string,
  slice: string,
  feature: string,
): Promise<BaselineSide> {
  const found = await wholePart(store, id, slice, feature);
  const part = found ?? (await wholePart(store, id, "all", feature));
  if (part === undefined) throw new MoorlineError("MOORLINE_STATE_BASELINE_PART", { id, feature });
  return { side: sideOfPart(part, id), slice: part.slice, fallsBack: part.slice !== slice };
}

async function wholePart(
  store: Store,
  id: string,
  slice: string,
  feature: string,
): Promise<BaselinePart | undefined> {
  const [part] = await store.baselines.parts(id, { slice, feature, block: WHOLE });
  return part;
}

/**
 * A stored part as a side; its threshold counts carry the baseline's id, as those of segments do. A part that was merged from windows still
 * has the counts of the baseline that those were counted for: they say nothing of this one.
 */
export function sideOfPart(part: BaselinePart, baselineId: string): NumericSide {
  const side = sideOfSketch(NumericSketch.decode(part.body));
  const counts = side.thresholdCounts;
  const own = counts != null && counts.id === OWN_THRESHOLDS;
  return { ...side, thresholdCounts: own ? { ...counts, id: baselineId } : null };
}

/** A sketch as a side of a comparison. */
export function sideOfSketch(sketch: NumericSketch): NumericSide {
  const { events, finite, missing } = sketch.counts;
  return {
    cdf: sketch.toCdf(),
    events,
    missing,
    nonFinite: events - finite - missing,
    thresholdCounts: sketch.thresholdCounts(),
  };
}
