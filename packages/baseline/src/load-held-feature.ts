import { MoorlineError } from "@moorline/errors";
import type { Store } from "@moorline/store";
import { BLOCK_COUNTS, WHOLE } from "./baseline-parts.js";
import { HeldFeature } from "./held-feature.js";

export interface HeldSlice {
  readonly held: HeldFeature;
  /** The slice that it is of: the one asked for, or `all` where the baseline has no part for that. */
  readonly slice: string;
}

/** The same, or null when the baseline has nothing of the feature. */
export async function findHeldFeature(
  store: Store,
  id: string,
  slice: string,
  feature: string,
): Promise<HeldSlice | null> {
  for (const from of slice === "all" ? ["all"] : [slice, "all"]) {
    const [whole] = await store.baselines.parts(id, { slice: from, feature, block: WHOLE });
    if (whole === undefined) continue;
    const [blocks] = await store.baselines.parts(id, { slice: from, feature, block: BLOCK_COUNTS });
    return { held: new HeldFeature(whole, blocks ?? null, id), slice: from };
  }
  return null;
}

/**
 * One feature and slice of a baseline with how it varies from block to block.
 *
 * @throws MOORLINE_STATE_BASELINE_PART when the baseline has nothing of the feature
 */
export async function loadHeldFeature(
  store: Store,
  id: string,
  slice: string,
  feature: string,
): Promise<HeldSlice> {
  const found = await findHeldFeature(store, id, slice, feature);
  if (found === null) throw new MoorlineError("MOORLINE_STATE_BASELINE_PART", { id, feature });
  return found;
}
