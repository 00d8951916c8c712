import { NumericSketch } from "@moorline/sketch";

const KINDS = ["finite", "missing", "nan", "positiveInfinity", "negativeInfinity"] as const;

/** Counts by kind of one feature, added up. */
export type KindSums = Record<"events" | (typeof KINDS)[number], number>;

export function noCounts(): KindSums {
  return { events: 0, finite: 0, missing: 0, nan: 0, positiveInfinity: 0, negativeInfinity: 0 };
}

export function addCounts(sums: KindSums, counts: KindSums): void {
  sums.events += counts.events;
  for (const kind of KINDS) sums[kind] += counts[kind];
}

/** The counts of an encoded sketch. */
export function countsOf(sketch: Uint8Array): KindSums {
  return { ...NumericSketch.decode(sketch).counts };
}

/** What is wrong with counts against the events that they should amount to, or null. */
export function kindProblem(counts: KindSums, events: number): string | null {
  const sum = KINDS.reduce((total, kind) => total + counts[kind], 0);
  if (sum !== counts.events)
    return `finite, missing and non-finite values add up to ${sum}, not to its ${counts.events} events`;
  return counts.events === events ? null : `it holds ${counts.events} events where there were ${events}`;
}

/** The first kind in which two counts differ, in words, or null. */
export function countDifference(stored: KindSums, expected: KindSums): string | null {
  const kind = (["events", ...KINDS] as const).find((name) => stored[name] !== expected[name]);
  return kind === undefined
    ? null
    : `it holds ${stored[kind]} (${kind}), its segments hold ${expected[kind]}`;
}
