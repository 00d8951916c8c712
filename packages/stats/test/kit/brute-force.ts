/** The truth, counted on raw values by the definitions, with no regard for speed. Shared by the tests of this package. */

export function shareAtMost(sample: readonly number[], x: number): number {
  return sample.filter((v) => v <= x).length / sample.length;
}

export function shareBelow(sample: readonly number[], x: number): number {
  return sample.filter((v) => v < x).length / sample.length;
}

export function bruteKs(a: readonly number[], b: readonly number[]): number {
  let distance = 0;
  for (const x of [...a, ...b]) {
    distance = Math.max(
      distance,
      Math.abs(shareAtMost(a, x) - shareAtMost(b, x)),
      Math.abs(shareBelow(a, x) - shareBelow(b, x)),
    );
  }
  return distance;
}

export function bruteW1(a: readonly number[], b: readonly number[]): number {
  const xs = [...a, ...b].sort((x, y) => x - y);
  let area = 0;
  for (let i = 1; i < xs.length; i += 1) {
    area += (xs[i]! - xs[i - 1]!) * Math.abs(shareAtMost(a, xs[i - 1]!) - shareAtMost(b, xs[i - 1]!));
  }
  return area;
}

/** Hyndman & Fan type 7 on a sorted copy, as their paper states it (counted from 1). */
export function bruteQuantile7(sample: readonly number[], rank: number): number {
  const sorted = [...sample].sort((x, y) => x - y);
  const h = (sorted.length - 1) * rank + 1;
  const j = Math.floor(h);
  const lower = sorted[j - 1]!;
  const upper = sorted[Math.min(j, sorted.length - 1)]!;
  return lower + (h - j) * (upper - lower);
}

/** Two-sided exact p-value by going through every way to deal the pooled values out to the two samples. */
export function bruteKsPValue(a: readonly number[], b: readonly number[]): number {
  const pooled = [...a, ...b];
  const observed = bruteKs(a, b);
  let all = 0;
  let asFar = 0;
  for (let mask = 0; mask < 1 << pooled.length; mask += 1) {
    const first = pooled.filter((_, i) => (mask >> i) & 1);
    if (first.length !== a.length) continue;
    all += 1;
    if (
      bruteKs(
        first,
        pooled.filter((_, i) => !((mask >> i) & 1)),
      ) >=
      observed - 1e-12
    )
      asFar += 1;
  }
  return asFar / all;
}
