import {
  countInWords,
  percentInWords,
  rankInWords,
  timesInWords,
  valueInWords,
} from "../figures-in-words.js";
import { directionOf, type ShareAtThreshold } from "./drift-place.js";
import { beyondShare } from "./floors.js";

/**
 * What a share shows, in words with its figures.
 *
 * For example: upper tail heavier: 3.4 % of values lie above the baseline's p99 (5.21), 3.4 times the baseline's 1.0 %; n = 12,000
 */
export function sentenceOf(share: ShareAtThreshold): string {
  const [now, before] = [beyondShare(share.part, share.observed), beyondShare(share.part, share.expected)];
  const n = `n = ${countInWords(share.events)}`;
  if (share.part === "missing") {
    return `${directionOf(share)} missing values: ${percentInWords(now)} of events carry no value, the baseline has ${percentInWords(before)}; ${n}`;
  }
  const at = share.value === null ? "" : ` (${valueInWords(share.value)})`;
  const where = `the baseline's ${rankInWords(share.rank!)}${at}`;
  if (share.part === "body") {
    return (
      `body ${directionOf(share)}: ${percentInWords(now)} of values lie at or below ${where}, ` +
      `where the baseline has ${percentInWords(before)}; ${n}`
    );
  }
  const side = share.part === "upper tail" ? "above" : share.strictly ? "below" : "at or below";
  return (
    `${share.part} ${directionOf(share)}: ${percentInWords(now)} of values lie ${side} ${where}, ` +
    `${timesInWords(now / before)} the baseline's ${percentInWords(before)}; ${n}`
  );
}

interface BothCounts {
  readonly baseline: number;
  readonly production: number;
}

/** That nothing is beyond tolerance, in words. */
export function holdingSentence(n: BothCounts): string {
  return `within tolerance at every threshold; ${bothInWords(n)}`;
}

/** That there are too few values, in words. */
export function tooFewSentence(n: BothCounts): string {
  return `too few values to tell: ${bothInWords(n)}`;
}

function bothInWords({ baseline, production }: BothCounts): string {
  return `n = ${countInWords(production)} against ${countInWords(baseline)} in the baseline`;
}
