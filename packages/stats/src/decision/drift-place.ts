import { beyondShare, type SharePair, type WatchedPart } from "./floors.js";

/** Where and which way a feature moved. */
export interface DriftPlace {
  readonly part: WatchedPart;
  /** Frozen rank of the threshold; null for `missing`. */
  readonly rank: number | null;
  /** The threshold; null for `missing`. */
  readonly threshold: number | null;
  /** Tails: heavier or lighter. Body: where the values went. Missing: more or fewer. */
  readonly direction: "heavier" | "lighter" | "higher" | "lower" | "more" | "fewer";
  /** Production's share over the baseline's: beyond the threshold for a tail, without a value for `missing`; null for the body. */
  readonly ratio: number | null;
  /** Production's share minus the baseline's, of the same shares; for the body of the values at or below the threshold. */
  readonly difference: number;
  readonly z: number;
}

/** A share with the threshold that it is of. */
export interface ShareAtThreshold extends SharePair {
  readonly rank: number | null;
  readonly value: number | null;
  /** True for the share strictly below the threshold, that at it left out. */
  readonly strictly: boolean;
}

/** The place that a share speaks for. */
export function placeOf(share: ShareAtThreshold, z: number): DriftPlace {
  const [now, before] = [beyondShare(share.part, share.observed), beyondShare(share.part, share.expected)];
  return {
    part: share.part,
    rank: share.rank,
    threshold: share.value,
    direction: directionOf(share),
    ratio: share.part === "body" ? null : now / before,
    difference: now - before,
    z,
  };
}

export function directionOf(share: SharePair): DriftPlace["direction"] {
  const [now, before] = [beyondShare(share.part, share.observed), beyondShare(share.part, share.expected)];
  if (share.part === "body") return now > before ? "lower" : "higher";
  if (share.part === "missing") return now > before ? "more" : "fewer";
  return now > before ? "heavier" : "lighter";
}
