import type { BinCount } from "../decile-bins.js";
import type { CategoryBin } from "./align-categories.js";

/** Effective events that a bin must expect on each side for the chi-square law to hold (Cochran 1954). */
export const LEAST_EXPECTED = 5;

/**
 * Bins large enough for the chi-square law: rare categories and the nameless bin pooled into one.
 *
 * Definition  a category stands alone when both sides expect at least 5 effective events of it, (b + p)·min(n, m)/(n + m)/D ≥ 5. The rest is one
 *             bin; while that expects less than 5 the smallest of the others joins it.
 * Shape       the pool, if any, is last. At least one bin unless there is none to begin with.
 * Edges       which bins are pooled depends on b + p alone, never on how the two differ, so that pooling does not bend the test.
 * Source      Cochran 1954, doi:10.2307/3001616.
 */
export function poolRare(bins: readonly CategoryBin[], designEffect = 1): BinCount[] {
  const n = bins.reduce((sum, bin) => sum + bin.baseline, 0);
  const m = bins.reduce((sum, bin) => sum + bin.production, 0);
  const least = (LEAST_EXPECTED * designEffect * (n + m)) / Math.min(n, m);
  const alone: BinCount[] = [];
  const pool = { baseline: 0, production: 0 };
  const take = ({ baseline, production }: BinCount) => {
    pool.baseline += baseline;
    pool.production += production;
  };
  for (const bin of bins) {
    if (bin.category !== null && sizeOf(bin) >= least)
      alone.push({ baseline: bin.baseline, production: bin.production });
    else take(bin);
  }
  alone.sort((a, b) => sizeOf(b) - sizeOf(a));
  while (sizeOf(pool) > 0 && sizeOf(pool) < least && alone.length > 0) take(alone.pop()!);
  return sizeOf(pool) > 0 ? [...alone, pool] : alone;
}

function sizeOf({ baseline, production }: BinCount): number {
  return baseline + production;
}
