import { MoorlineError } from "@moorline/errors";
import { NumericSketch } from "@moorline/sketch";
import type { NumericSide } from "@moorline/stats";
import type { BaselinePart, Store } from "@moorline/store";

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
  const [part] = await store.baselines.parts(id, { slice, feature, block: -1 });
  return part;
}

/** A stored part as a side; its threshold counts carry the baseline's id, as those of segments do. */
export function sideOfPart(part: BaselinePart, baselineId: string): NumericSide {
  return sideOfSketch(NumericSketch.decode(part.body), baselineId);
}

/** A sketch as a side of a comparison. `thresholdsId` names the baseline that its thresholds are of, where they are its own. */
export function sideOfSketch(sketch: NumericSketch, thresholdsId?: string): NumericSide {
  const { events, finite, missing } = sketch.counts;
  const counts = sketch.thresholdCounts();
  return {
    cdf: sketch.toCdf(),
    events,
    missing,
    nonFinite: events - finite - missing,
    thresholdCounts: counts === null ? null : { ...counts, id: thresholdsId ?? counts.id },
  };
}
