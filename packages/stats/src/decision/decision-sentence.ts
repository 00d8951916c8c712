import { countInWords } from "../figures-in-words.js";
import type { WatchedCounts } from "../sway/watched-counts.js";
import { type Decision, type DecisionGround, thresholdOf } from "./decide.js";
import { type Evidence, isAtOnce } from "./evidence.js";
import { holdingSentence, sentenceOf, tooFewSentence } from "./share-sentence.js";

/** A decision in words with its figures: what was seen, over how long, how strong the evidence is and how strong it has to be. */
export function decisionSentence(decision: Decision, counts: WatchedCounts, ground: DecisionGround): string {
  const { state, evidence, memory } = decision;
  const { rule, tolerance } = ground;
  const n = { baseline: tolerance.baselineValues, production: counts.finite };
  if (evidence !== null && state !== "holding") {
    const windows = evidence.scale * evidence.blocks;
    const span = windows === 1 ? "in 1 window" : `over ${countInWords(windows)} windows`;
    return `${sentenceOf(thresholdOf(evidence, ground))} ${span}; ${strengthInWords(decision, evidence, ground)}${basisInWords(ground)}`;
  }
  if (state === "thin") return tooFewSentence(n);
  if (state === "holding") return holdingSentence(n);
  const few = tolerance.independentValues(counts.finite) < rule.minEvents;
  if (few) return `still adrift, for this window cannot tell; ${tooFewSentence(n)}`;
  return `still adrift: ${memory.calmWindows} of ${rule.releaseAfter} windows back within tolerance; ${holdingSentence(n)}`;
}

/** How strong the evidence is, beside what would be, or was, enough. */
function strengthInWords({ state }: Decision, evidence: Evidence, { rule }: DecisionGround): string {
  const strength = `|z| = ${Math.abs(evidence.z).toFixed(1)}`;
  const needed = rule.zPage.toFixed(1);
  if (evidence.blocks === 1) {
    if (state === "straining") return `${strength}, not yet in ${rule.persistence} windows on end`;
    return isAtOnce(evidence, rule) ? `${strength}, far enough at once` : strength;
  }
  if (state === "straining") return `${strength} of the ${needed} that make it adrift`;
  return Math.abs(evidence.z) >= rule.zPage ? `${strength}, ${needed} is enough` : strength;
}

/** What the reader has to know of the tolerance; nothing where it was learnt as it should be. */
function basisInWords({ tolerance }: DecisionGround): string {
  if (tolerance.basis === "time") return "";
  if (tolerance.basis === "rows") return "; how it varies was learnt from the order of the baseline's rows";
  return "; the baseline has too few blocks: its events were taken as independent";
}
