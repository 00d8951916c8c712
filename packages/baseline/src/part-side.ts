import { NumericSketch } from "@moorline/sketch";
import type { NumericSide } from "@moorline/stats";
import type { BaselinePart } from "@moorline/store";
import { OWN_THRESHOLDS } from "./own-thresholds.js";

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
