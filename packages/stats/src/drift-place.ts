import { countInWords, percentInWords, rankInWords, timesInWords, valueInWords } from "./figures-in-words.js";
import { tailShares } from "./tolerance.js";
import type { WatchedShare } from "./watched-share.js";

/** Where and which way a feature moved. */
export interface DriftPlace {
  readonly part: "lower tail" | "body" | "upper tail" | "missing";
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

/** The place that a watched share speaks for. */
export function placeOf(share: WatchedShare, z: number): DriftPlace {
  const { now, before } = tailShares(share);
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

function directionOf(share: WatchedShare): DriftPlace["direction"] {
  const { now, before } = tailShares(share);
  if (share.part === "body") return now > before ? "lower" : "higher";
  if (share.part === "missing") return now > before ? "more" : "fewer";
  return now > before ? "heavier" : "lighter";
}

/**
 * What a watched share shows, in words with its figures.
 *
 * For example: upper tail heavier: 3.4 % of values lie above the baseline's p99 (5.21), 3.4 times the baseline's 1.0 %; n = 12,000
 */
export function sentenceOf(share: WatchedShare): string {
  const { now, before } = tailShares(share);
  const n = `n = ${countInWords(share.productionEvents)}`;
  if (share.part === "missing") {
    const which = directionOf(share) === "more" ? "more" : "fewer";
    return `${which} missing values: ${percentInWords(now)} of events carry no value, the baseline has ${percentInWords(before)}; ${n}`;
  }
  const where = `the baseline's ${rankInWords(share.rank!)} (${valueInWords(share.value!)})`;
  if (share.part === "body") {
    return (
      `body ${directionOf(share)}: ${percentInWords(now)} of values lie at or below ${where}, ` +
      `where the baseline has ${percentInWords(before)}; ${n}`
    );
  }
  const side = share.part === "upper tail" ? "above" : "at or below";
  return (
    `${share.part} ${directionOf(share)}: ${percentInWords(now)} of values lie ${side} ${where}, ` +
    `${timesInWords(now / before)} the baseline's ${percentInWords(before)}; ${n}`
  );
}
