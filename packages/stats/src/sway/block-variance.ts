export interface BlockVarianceInput {
  /** By block. */
  readonly hits: ArrayLike<number>;
  readonly totals: ArrayLike<number>;
  /** Expected share by block. */
  readonly expected: (block: number) => number;
  /** Blocks that are pooled into one. */
  readonly span: number;
  /** Group that a run of blocks is counted in, by its first block; default one group. */
  readonly groups?: number;
  readonly groupOf?: (firstBlock: number) => number;
}

export interface BlockVariance {
  /** By how much shares vary more than those of independent events would; 0 where no run had events. */
  readonly ratio: number;
  /** Independent runs that it is worth: those that overlap count for less. */
  readonly runs: number;
}

/** Runs begin this part of their length apart … */
const STEPS_A_RUN = 4;
/** … and each is worth so many independent ones: 1 + 2·Σ(1 − k/4)² for white noise, k = 1 … 3. */
const OVERLAP_WORTH = 2.75;

/**
 * Raw design effect at one scale: variance of the shares of pooled blocks over that of independent events, by group.
 *
 * Definition  V(S) = mean over runs of S blocks of (g − e)²/(e(1 − e))·n, with g = hits/n of the run and e its expected share. Runs of four blocks and
 *             more overlap, each beginning a quarter of its length after the last: 1.45 times as many degrees of freedom as disjoint ones give.
 * Shape       runs begin with the first block; what is left over at the end, and runs in which nothing came, are left out.
 * Source      design effect: Rao & Scott 1992, doi:10.2307/2532311; variances from overlapping runs: Allan variance practice, e.g. Greenhall 1991
 *             (recalled).
 */
export function blockVariance(input: BlockVarianceInput): readonly BlockVariance[] {
  const { hits, totals, expected, span, groups = 1, groupOf } = input;
  const sums = new Float64Array(groups);
  const runs = new Uint32Array(groups);
  const step = span % STEPS_A_RUN === 0 ? span / STEPS_A_RUN : span;
  for (let first = 0; first + span <= hits.length; first += step) {
    let n = 0;
    let hit = 0;
    let wanted = 0;
    for (let block = first; block < first + span; block += 1) {
      const total = totals[block]!;
      if (total === 0) continue;
      n += total;
      hit += hits[block]!;
      wanted += total * expected(block);
    }
    if (n === 0) continue;
    const group = groupOf === undefined ? 0 : groupOf(first);
    const e = wanted / n;
    const difference = hit / n - e;
    sums[group]! += ((difference * difference) / (e * (1 - e))) * n;
    runs[group]! += 1;
  }
  return Array.from(sums, (sum, group) => {
    const count = runs[group]!;
    return { ratio: count === 0 ? 0 : sum / count, runs: step === span ? count : count / OVERLAP_WORTH };
  });
}
