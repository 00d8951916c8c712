import type { CdfView } from "../cdf-view.js";
import { walkUnion } from "../walk-union.js";
import type { RankRange } from "../wasserstein1.js";

export interface WassersteinChangeOptions {
  /** Default: all ranks. `TAIL_RANGES` has those of a tail. */
  readonly range?: RankRange;
  /** By how much dependence inflates variances, ≥ 1. Default 1. */
  readonly designEffect?: number;
}

/**
 * Standard error of a Wasserstein-1 distance that is not 0.
 *
 * Definition  SE² = D·(Var_G[ψ_G(Y)]/m + Var_F[ψ_F(X)]/n), ψ_F(x) = ∫ sgn(F − G)(t) dt over t < x with F(t) within the range, ψ_G with G(t):
 *             what one event more does to the distance.
 * Units       the feature's unit.
 * Edges       0 when nothing varies; at most Number.MAX_VALUE.
 * Cost        O(knots of both).
 * Source      del Barrio, Giné & Matrán 1999, doi:10.1214/aop/1022677394.
 */
export function wassersteinError(
  baseline: CdfView,
  production: CdfView,
  { range = { from: 0, to: 1 }, designEffect = 1 }: WassersteinChangeOptions = {},
): number {
  const sides = [new Influence(range, baseline.n), new Influence(range, production.n)] as const;
  const from = new Float64Array(2);
  const to = new Float64Array(2);
  let x = Number.NaN;
  walkUnion([baseline, production], ({ value, below, upTo }) => {
    to[0] = below[0]! / baseline.n;
    to[1] = below[1]! / production.n;
    if (!Number.isNaN(x)) {
      const width = Math.min(value - x, Number.MAX_VALUE);
      if (from[0] === to[0] && from[1] === to[1]) crossFlat(sides, width, from);
      else crossPiece(sides, width, from, to, range);
    }
    for (const s of [0, 1] as const) {
      sides[s].jump((upTo[s]! - below[s]!) / sides[s].n);
      from[s] = upTo[s]! / sides[s].n;
    }
    x = value;
  });
  const error = Math.sqrt(
    designEffect * (sides[0].variance() / baseline.n + sides[1].variance() / production.n),
  );
  return Number.isFinite(error) ? error : Number.MAX_VALUE;
}

/** A piece on which neither CDF rises: between two values of exact samples. */
function crossFlat(sides: readonly [Influence, Influence], width: number, at: Float64Array): void {
  const step = Math.sign(at[0]! - at[1]!) * width;
  sides[0].move(step, at[0]!, 0);
  sides[1].move(step, at[1]!, 0);
}

/** Cuts a piece on which both CDFs are straight where they cross and where they enter or leave the range. */
function crossPiece(
  sides: readonly [Influence, Influence],
  width: number,
  from: Float64Array,
  to: Float64Array,
  range: RankRange,
): void {
  const cuts = [0, 1];
  const cutAt = (start: number, end: number, level: number) => {
    const t = (level - start) / (end - start);
    if (t > 0 && t < 1) cuts.push(t);
  };
  cutAt(from[0]! - from[1]!, to[0]! - to[1]!, 0);
  for (const s of [0, 1] as const) {
    cutAt(from[s]!, to[s]!, range.from);
    cutAt(from[s]!, to[s]!, range.to);
  }
  cuts.sort((a, b) => a - b);
  for (let i = 1; i < cuts.length; i += 1) {
    const share = cuts[i]! - cuts[i - 1]!;
    const middle = (cuts[i]! + cuts[i - 1]!) / 2;
    const f = from[0]! + (to[0]! - from[0]!) * middle;
    const g = from[1]! + (to[1]! - from[1]!) * middle;
    const step = Math.sign(f - g) * width * share;
    sides[0].move(step, f, (to[0]! - from[0]!) * share);
    sides[1].move(step, g, (to[1]! - from[1]!) * share);
  }
}

/** The running ψ of one side with its first two moments. */
class Influence {
  readonly n: number;
  readonly #range: RankRange;
  #psi = 0;
  #mean = 0;
  #square = 0;

  constructor(range: RankRange, n: number) {
    this.#range = range;
    this.n = n;
  }

  /** So much of the side lies at this very value. */
  jump(mass: number): void {
    this.#mean += mass * this.#psi;
    this.#square += mass * this.#psi * this.#psi;
  }

  /** ψ goes on by a step, on which so much of the side lies evenly. */
  move(step: number, rank: number, mass: number): void {
    const from = this.#psi;
    if (rank >= this.#range.from && rank <= this.#range.to) this.#psi += step;
    const to = this.#psi;
    this.#mean += mass * (from / 2 + to / 2);
    this.#square += (mass * (from * from + from * to + to * to)) / 3;
  }

  variance(): number {
    const variance = this.#square - this.#mean * this.#mean;
    // Rounding can bring it below 0; what overflows is told as the greatest number.
    return Number.isFinite(variance) ? Math.max(0, variance) : Number.MAX_VALUE;
  }
}
