import { chiSquareTail } from "../special/chi-square.js";

export interface ChiSquareTest {
  readonly statistic: number;
  readonly df: number;
  readonly pValue: number;
}

export interface HomogeneityTest {
  /** Likelihood ratio: 2 Σ O ln(O/E). */
  readonly g: ChiSquareTest;
  /** Pearson's: Σ (O − E)²/E. */
  readonly chiSquare: ChiSquareTest;
}

/**
 * Do rows of counts come from one law over their columns? G and Pearson's chi-square test.
 *
 * Definition  E = row total · column total / total; both statistics divided by the design effect; df = (rows − 1)(columns − 1), rows and columns
 *             without any event left out.
 * Shape       rows of equal length, counts ≥ 0.
 * Accuracy    size of the law where every E is at least 5: docs/categories.md; relative 1e-12 in the p-value.
 * Edges       fewer than two rows or columns with events → statistic 0, df 0, p 1.
 * Cost        O(rows · columns).
 * Source      Pearson 1900, doi:10.1080/14786440009463897; Wilks 1938, doi:10.1214/aoms/1177732360; division by D: Rao & Scott 1992,
 *             doi:10.2307/2532311. The same as R's chisq.test(correct = FALSE).
 *
 * @example homogeneityTest([[5, 5], [10, 10]]).g.pValue // => 1
 */
export function homogeneityTest(rows: readonly (readonly number[])[], designEffect = 1): HomogeneityTest {
  const columns = (rows[0] ?? []).map((_, c) => rows.reduce((sum, row) => sum + row[c]!, 0));
  const totals = rows.map((row) => row.reduce((sum, count) => sum + count, 0));
  const total = totals.reduce((sum, count) => sum + count, 0);
  const used = (sums: readonly number[]) => sums.filter((sum) => sum > 0).length;
  const df = Math.max(0, used(totals) - 1) * Math.max(0, used(columns) - 1);
  let g = 0;
  let chiSquare = 0;
  for (const [r, row] of rows.entries()) {
    for (const [c, observed] of row.entries()) {
      const expected = (totals[r]! / total) * columns[c]!;
      if (df === 0 || expected === 0) continue;
      chiSquare += (observed - expected) ** 2 / expected;
      // O ln(O/E) − (O − E) ≥ 0 cell by cell, and the differences add up to 0: nothing cancels where the rows are alike.
      if (observed > 0) g += 2 * (observed * Math.log(observed / expected) - (observed - expected));
      else g += 2 * expected;
    }
  }
  return { g: tested(g / designEffect, df), chiSquare: tested(chiSquare / designEffect, df) };
}

function tested(statistic: number, df: number): ChiSquareTest {
  return { statistic: Math.max(0, statistic), df, pValue: df === 0 ? 1 : chiSquareTail(statistic, df) };
}
