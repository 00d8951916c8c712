/** Statistics straight from sorted raw values, without any of our code: what the answers of the whole are held against. */
export interface Raw {
  readonly sorted: Float64Array;
}

export function rawOf(values: readonly number[]): Raw {
  return { sorted: Float64Array.from(values).sort() };
}

/** Values at or below x. */
export function countUpTo({ sorted }: Raw, x: number): number {
  let [low, high] = [0, sorted.length];
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (sorted[middle]! <= x) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Values below x. */
export function countBelow({ sorted }: Raw, x: number): number {
  let [low, high] = [0, sorted.length];
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (sorted[middle]! < x) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Hyndman & Fan type 7. */
export function rawQuantile({ sorted }: Raw, rank: number): number {
  const at = (sorted.length - 1) * rank;
  const below = Math.floor(at);
  const next = sorted[Math.min(below + 1, sorted.length - 1)]!;
  return sorted[below]! + (at - below) * (next - sorted[below]!);
}

function distinct(a: Raw, b: Raw): number[] {
  return [...new Set([...a.sorted, ...b.sorted])].toSorted((x, y) => x - y);
}

/** sup |F − G| over every value. */
export function rawKs(a: Raw, b: Raw): number {
  return distinct(a, b).reduce((most, x) => {
    const gap = Math.abs(countUpTo(a, x) / a.sorted.length - countUpTo(b, x) / b.sorted.length);
    return Math.max(most, gap);
  }, 0);
}

/** ∫ |F − G| dx; with `errorAt`, also how far it may be off when F and G are each known up to that rank error. */
export function rawWasserstein(
  a: Raw,
  b: Raw,
  errorAt: (rankA: number, rankB: number) => number,
): { readonly distance: number; readonly allowed: number } {
  const values = distinct(a, b);
  let [distance, allowed] = [0, 0];
  for (let i = 0; i + 1 < values.length; i++) {
    const width = values[i + 1]! - values[i]!;
    const [rankA, rankB] = [
      countUpTo(a, values[i]!) / a.sorted.length,
      countUpTo(b, values[i]!) / b.sorted.length,
    ];
    distance += width * Math.abs(rankA - rankB);
    allowed += width * errorAt(rankA, rankB);
  }
  return { distance, allowed };
}
