import {
  countInWords,
  percentInWords,
  rankInWords,
  timesInWords,
  valueInWords,
} from "../figures-in-words.js";

interface ToldTail {
  readonly rank: number;
  readonly threshold: number;
  readonly exceedance: number;
  readonly expected: number;
  readonly ratio: number;
  readonly interval: readonly [low: number, high: number];
  readonly n: { readonly baseline: number; readonly production: number };
  readonly tail: "lower" | "upper";
  readonly inclusive: boolean;
}

type UnreachedTail = Pick<ToldTail, "rank" | "n">;

/**
 * The exceedance of one rank in words.
 *
 * For example: 2.1 % of values lie above the baseline's p99 (5.21), 2.1 times its 1.0 % (95 % interval 1.6 times to 2.7 times): heavier; n = 12,000
 */
export function tailSentence(told: ToldTail | UnreachedTail): string {
  const { rank, n } = told;
  if (!("threshold" in told)) {
    return `beyond ${rankInWords(rank)} the baseline has too few values to tell: n = ${countInWords(n.baseline)}`;
  }
  const [low, high] = told.interval;
  const side = told.tail === "upper" ? "above" : "below";
  const verdict = low > 1 ? "heavier" : high < 1 ? "lighter" : "no more than chance";
  return (
    `${percentInWords(told.exceedance)} of values lie ${told.inclusive ? `at or ${side}` : side} the baseline's ` +
    `${rankInWords(rank)} (${valueInWords(told.threshold)}), ${timesInWords(told.ratio)} its ${percentInWords(told.expected)} ` +
    `(95 % interval ${timesInWords(low)} to ${timesInWords(high)}): ${verdict}; n = ${countInWords(n.production)}`
  );
}
