import type { CdfView } from "../cdf-view.js";
import { clopperPearson } from "../clopper-pearson.js";
import {
  countInWords,
  percentInWords,
  rankInWords,
  timesInWords,
  valueInWords,
} from "../figures-in-words.js";
import { quantileOf } from "../quantile-of.js";
import type { Pattern, PatternKind } from "./pattern.js";
import { ENVELOPE_DEVIATIONS } from "./pattern-context.js";

export interface SentenceSides {
  readonly baseline: CdfView;
  readonly production: CdfView;
  readonly unit: string | null;
  readonly effective: number;
}

/** A pattern in words with its figures, n, and what else it may be. */
export function patternSentence(pattern: Pattern, second: Pattern | null, sides: SentenceSides): string {
  const { apartFrom } = pattern;
  const apart = apartFrom === undefined ? "" : `apart from the value ${value(apartFrom, sides.unit)}, `;
  const said = `${apart}${WORDS[pattern.kind](pattern, sides)}`;
  const other = second === null ? "" : `; it may also be ${AS_ALTERNATIVE[second.kind]}`;
  return `${said}${other}; n = ${countInWords(sides.production.n)} against ${countInWords(sides.baseline.n)}`;
}

type Words = (pattern: Pattern, sides: SentenceSides) => string;

const WORDS: Readonly<Record<PatternKind, Words>> = {
  none: (_, sides) => `the pairs lie on the reference line, as near as chance allows${visibleInWords(sides)}`,
  location: (pattern, sides) => `everything moved ${moveInWords(pattern, sides)}`,
  scale: ({ figures }) => `values spread ${spreadInWords(figures["factor"]!)} about the same middle`,
  "location and scale": (pattern, sides) =>
    pattern.figures["proportion"] === 1
      ? `all values are multiplied by about ${Number(pattern.figures["factor"]!.toPrecision(3))}: the median moved ${moveInWords(pattern, sides)}`
      : `everything moved ${moveInWords(pattern, sides)}, and values spread ${spreadInWords(pattern.figures["factor"]!)}`,
  "upper tail": ({ figures }, sides) =>
    `only the upper tail left the line: ${tailInWords(figures, sides, true)}`,
  "lower tail": ({ figures }, sides) =>
    `only the lower tail left the line: ${tailInWords(figures, sides, false)}`,
  "both tails": ({ figures }, sides) => {
    const lower = {
      rank: figures["lowerRank"]!,
      ratio: figures["lowerRatio"]!,
      threshold: figures["lowerThreshold"]!,
    };
    return `both tails left the line: ${tailInWords(figures, sides, true)}; ${tailInWords(lower, sides, false)}`;
  },
  contamination: ({ figures }, sides) =>
    `a small group by itself: about ${percentInWords(figures["share"]!)} of values (${shareInterval(figures["share"]!, sides)}) lie far ${side(figures)}, around ${value(figures["at"]!, sides.unit)}`,
  mixture: ({ figures }, { unit }) =>
    `a second population: ${figures["atLeast"] === 1 ? "at least" : "about"} ${percentInWords(figures["share"]!)} of values lie ${side(figures)} the rest, around ${value(figures["at"]!, unit)}`,
  gap: ({ figures }, { unit }) =>
    `values from ${value(figures["from"]!, unit)} to ${value(figures["to"]!, unit)} are gone: ${percentInWords(figures["share"]!)} lie there, the baseline has ${percentInWords(figures["before"]!)}`,
  clipped: ({ figures }, sides) =>
    `values are clipped at ${value(figures["value"]!, sides.unit)}: ${percentInWords(figures["share"]!)} (${shareInterval(figures["share"]!, sides)}) are exactly that and none lies ${side(figures)} it, where the baseline has ${percentInWords(figures["beyond"]!)}`,
  "unit change": ({ figures, name }) =>
    `looks like another unit: values are ${factorInWords(figures["factor"]!)}${offsetInWords(figures["offset"]!)}, as when ${name}`,
  "sign flip": () => "the sign is turned: production is the baseline times −1",
  "default-fill": ({ figures }, sides) =>
    `${percentInWords(figures["share"]!)} of values (${shareInterval(figures["share"]!, sides)}) are exactly ${value(figures["value"]!, sides.unit)}, as a filled-in default would be; the baseline has ${percentInWords(figures["before"]!)}`,
  rounding: ({ figures }, { unit }) =>
    `values are ${figures["ended"] === 1 ? "no longer rounded; in the baseline" : "rounded:"} ${countInWords(figures["values"]!)} of them make up ${percentInWords(figures["covered"]!)}, ${value(figures["step"]!, unit)} apart`,
  "vanished atom": ({ figures }, { unit }) =>
    `the value ${value(figures["value"]!, unit)} is ${figures["share"]! < 0.001 ? "gone" : `down to ${percentInWords(figures["share"]!)}`}: ${percentInWords(figures["before"]!)} of the baseline are exactly that`,
  shape: (pattern, { unit }) =>
    `the shape changed in no way that has a simple name, most at ${atInWords(pattern, unit)}`,
  "all missing": ({ figures }) =>
    `none of ${countInWords(figures["missing"]!)} events carries a value; ${percentInWords(figures["before"]!)} of the baseline's were without one`,
  thin: () => "too few values to tell a pattern",
  "cannot tell": (pattern, { unit }) => {
    const { figures } = pattern;
    if (figures["z"] !== undefined)
      return `something changed, most at ${atInWords(pattern, unit)}, but the evidence is too weak to tell what pattern it is`;
    return figures["largest"] === undefined && figures["scale"] === undefined
      ? "the baseline has one value only: there is no spread to measure a change by"
      : "values are too large to be measured against each other";
  },
};

const AS_ALTERNATIVE: Readonly<Record<PatternKind, string>> = {
  none: "no change",
  location: "a move of everything",
  scale: "a change of spread",
  "location and scale": "a move with a change of spread",
  "upper tail": "the upper tail alone",
  "lower tail": "the lower tail alone",
  "both tails": "both tails",
  contamination: "a small group by itself",
  mixture: "a second population",
  gap: "a range without values",
  clipped: "clipping",
  "unit change": "another unit",
  "sign flip": "a turned sign",
  "default-fill": "a filled-in default",
  rounding: "rounding",
  "vanished atom": "a value that is gone",
  shape: "a change of shape",
  "all missing": "missing values",
  thin: "chance",
  "cannot tell": "something else",
};

/** A median that leaves its rank by so many standard deviations is seen nearly always: 3.7 to be told from chance, 1.3 for nine cases in ten. */
const Z_SEEN = 5;

function visibleInWords({ baseline, production, unit, effective }: SentenceSides): string {
  const envelope = Math.hypot(baseline.rankErrorAt(0.5), production.rankErrorAt(0.5));
  const rank = 0.5 + Z_SEEN * Math.hypot(0.5 / Math.sqrt(effective), envelope / ENVELOPE_DEVIATIONS);
  if (rank >= 1) return "";
  const least = quantileOf(baseline, rank) - quantileOf(baseline, 0.5);
  return least > 0 ? `; a move of less than about ${value(least, unit)} would not show` : "";
}

function atInWords({ figures }: Pattern, unit: string | null): string {
  return `${rankInWords(figures["rank"]!)} (${value(figures["now"]!, unit)}, the baseline has ${value(figures["before"]!, unit)})`;
}

/** `up by 1.2 °C (0.9 °C to 1.5 °C)`: the move of the median with its distribution-free 95 % interval. */
function moveInWords({ figures }: Pattern, { unit }: SentenceSides): string {
  const [shift, low, high] = [figures["shift"]!, figures["low"]!, figures["high"]!];
  const [least, most] = shift >= 0 ? [low, high] : [-high, -low];
  return `${shift >= 0 ? "up" : "down"} by about ${value(Math.abs(shift), unit)} (${value(least, unit)} to ${value(most, unit)})`;
}

/** The 95 % interval of a share of production. */
function shareInterval(share: number, { effective }: SentenceSides): string {
  const [low, high] = clopperPearson(Math.min(effective, share * effective), effective, 0.95);
  return `${percentInWords(low)} to ${percentInWords(high)}`;
}

function spreadInWords(factor: number): string {
  const times = `about ${factor >= 100 ? countInWords(factor) : Number(factor.toPrecision(3))} times as wide`;
  return factor >= 1 ? times : `only ${times}`;
}

/** With the 95 % interval of the share over the baseline's. */
function tailInWords(
  figures: Readonly<Record<string, number>>,
  { effective, unit }: SentenceSides,
  upper: boolean,
): string {
  const rank = figures["rank"]!;
  const expected = upper ? 1 - rank : rank;
  const share = Math.min(1, figures["ratio"]! * expected);
  const interval = clopperPearson(Math.min(effective, share * effective), effective, 0.95);
  const [low, high] = [interval[0] / expected, interval[1] / expected];
  const where = upper ? "above" : "below";
  return (
    `${percentInWords(share)} of values lie ${where} ${value(figures["threshold"]!, unit)}, where ${percentInWords(expected)} were to be expected ` +
    `(${timesInWords(figures["ratio"]!)}; ${timesInWords(low)} to ${timesInWords(high)}), beyond ${rankInWords(rank)} of the rest`
  );
}

function side(figures: Readonly<Record<string, number>>): string {
  return figures["upper"] === 1 ? "above" : "below";
}

function factorInWords(factor: number): string {
  if (factor === 1) return "the baseline's";
  return factor > 1
    ? `${valueInWords(factor)} times the baseline's`
    : `the baseline's divided by ${valueInWords(1 / factor)}`;
}

function offsetInWords(offset: number): string {
  if (offset === 0) return "";
  return offset > 0 ? ` plus ${valueInWords(offset)}` : ` less ${valueInWords(-offset)}`;
}

function value(amount: number, unit: string | null): string {
  return unit === null ? valueInWords(amount) : `${valueInWords(amount)} ${unit}`;
}
