import type { DesignEffect } from "../design-effect.js";
import { BAND_CRITICAL, type BandConfidence } from "../deviance-band.js";
import type { NumericComparison } from "../numeric-comparison.js";
import { DEFAULT_DECISION_RULE, type DecisionRule } from "./decision-rule.js";
import { type DriftPlace, placeOf } from "./drift-place.js";
import { holdingSentence, sentenceOf, tooFewSentence } from "./share-sentence.js";
import { standingOf } from "./standing.js";
import { furthestFirst, type WatchedShare, watchedShares } from "./watched-share.js";

export interface Verdict {
  readonly state: "holding" | "straining" | "adrift" | "thin";
  /** Where it left tolerance or band furthest; null when it did not. */
  readonly place: DriftPlace | null;
  readonly sentence: string;
}

/**
 * What one comparison without a time axis amounts to.
 *
 * Definition  at each watched share: is the effect floor passed, and is the 99.9 % simultaneous band left (|z| > 4.1)? Both at one place →
 *             adrift; only one anywhere → straining; none → holding. A floor passed by chance is not held against a feature: for
 *             straining the 95 % band (|z| > 3.018) must be left there too.
 * Edges       thin when fewer effective events than `minEvents` stand on both sides, unless both conditions hold anyway:
 *             what is plain from few values is said, only "holding" needs many.
 * Source      docs/decision.md
 */
export function compareVerdict(
  comparison: NumericComparison,
  rule: DecisionRule = DEFAULT_DECISION_RULE,
  designEffect?: DesignEffect,
): Verdict {
  const judged = watchedShares(comparison, FEWEST)
    .map((share) => ({ share, ...standingOf(share, rule, designEffect) }))
    .sort(furthestFirst);
  const adrift = judged.find(({ floorPassed, z }) => floorPassed && leavesBand(z, 0.999));
  if (adrift) return verdictAt("adrift", adrift);
  const enough = watchedShares(comparison, rule.minEvents);
  if (!enough.some((share) => share.part !== "missing")) {
    return { state: "thin", place: null, sentence: thinSentence(comparison) };
  }
  const straining = judged.find(
    ({ floorPassed, z }) => leavesBand(z, 0.999) || (floorPassed && leavesBand(z, 0.95)),
  );
  if (straining) return verdictAt("straining", straining);
  return { state: "holding", place: null, sentence: holdingSentence(comparison.n) };
}

/** Below this even a total displacement cannot leave the band. */
const FEWEST = 1;

function leavesBand(z: number, confidence: BandConfidence): boolean {
  return Math.abs(z) > BAND_CRITICAL[confidence];
}

function verdictAt(
  state: "adrift" | "straining",
  found: { readonly share: WatchedShare; readonly z: number },
): Verdict {
  return { state, place: placeOf(found.share, found.z), sentence: sentenceOf(found.share) };
}

/** Why a comparison is too thin, in words. */
function thinSentence({ n, reason }: NumericComparison): string {
  return reason === null ? tooFewSentence(n) : `too few values to tell: ${reason}`;
}
