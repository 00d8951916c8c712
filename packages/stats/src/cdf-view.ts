/**
 * What every statistic of this package sees of a sample: an empirical CDF as knots, whatever keeps it.
 *
 * Definition  F(x) = share of values ≤ x, right-continuous; F jumps from `below[i]` to `upTo[i]` at `values[i]` and is
 *             linear from `upTo[i]` to `below[i + 1]` between two knots; 0 before the first knot, 1 after the last.
 * Shape       `values` strictly ascending and finite; `below[0]` = 0; below[i] ≤ upTo[i] ≤ below[i + 1]; the last `upTo` = n.
 * Units       `values`: the feature's unit; `below` and `upTo`: events, not shares.
 * Edges       n = 0 means no knots at all.
 */
export interface CdfView {
  /** Finite values behind the view. */
  readonly n: number;
  readonly values: Float64Array;
  /** Events < values[i]: the left limit at the knot. */
  readonly below: Float64Array;
  /** Events ≤ values[i]: the right limit at the knot. */
  readonly upTo: Float64Array;
  /** True when the knots are the sample itself: F is then flat between knots and every count is an integer. */
  readonly exact: boolean;
  /** Largest rank error to reckon with at a rank, as a share of n; 0 for an exact view. */
  readonly rankErrorAt: (rank: number) => number;
}
