import { MoorlineError } from "@moorline/errors";

/**
 * One side of a categorical comparison.
 *
 * Shape   events = missing + Σ counts + other, all whole and ≥ 0. A category in `counts` was counted exactly, also with 0; one that is not may
 *         lie within `other`; with `other` = 0 it did not come.
 */
export interface CategoryCounts {
  /** Everything that came. */
  readonly events: number;
  /** Events without a value. */
  readonly missing: number;
  readonly counts: ReadonlyMap<string, number>;
  /** Events with a value of a category that is not kept. */
  readonly other: number;
}

/**
 * Counts from raw values: null and undefined count as missing, any text is a category, the empty one too.
 *
 * @example categoryCountsOf(["a", "b", "a", null]).counts.get("a") // => 2
 */
export function categoryCountsOf(values: Iterable<string | null | undefined>): CategoryCounts {
  const counts = new Map<string, number>();
  let events = 0;
  let missing = 0;
  for (const value of values) {
    events += 1;
    if (value === null || value === undefined) missing += 1;
    else counts.set(value, (counts.get(value) ?? 0) + 1);
  }
  return { events, missing, counts, other: 0 };
}

/**
 * Events with a value, after a check that the side adds up.
 *
 * @throws MOORLINE_INPUT_STATISTIC_DOMAIN when it does not
 */
export function valuesOf({ events, missing, counts, other }: CategoryCounts): number {
  let values = other;
  let whole = isCount(missing) && isCount(other);
  for (const count of counts.values()) {
    values += count;
    whole &&= isCount(count);
  }
  if (whole && values + missing === events) return values;
  throw new MoorlineError("MOORLINE_INPUT_STATISTIC_DOMAIN", {
    name: "the number of events",
    value: events,
    domain: "the sum of missing values, kept categories and other",
  });
}

function isCount(value: number): boolean {
  return Number.isSafeInteger(value) && value >= 0;
}
