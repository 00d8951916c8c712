import { mixScale, unitShare } from "./scale.js";
import type { SketchState } from "./sketch-state.js";

/**
 * A cumulative distribution by its knots, in events. F jumps at a knot from below[i] to upTo[i] and is linear from upTo[i] to
 * below[i + 1]; left of the first knot it is 0, right of the last it is n.
 */
export interface CdfKnots {
  /** Finite events. */
  readonly n: number;
  /** Ascending, distinct. */
  readonly values: Float64Array;
  /** Events < values[i]. */
  readonly below: Float64Array;
  /** Events ≤ values[i]. */
  readonly upTo: Float64Array;
  /** Every event sits on a knot: F is the empirical CDF. */
  readonly exact: boolean;
  /** 0 when exact; else the measured envelope of the rank error at this rank, as a fraction. Measured, not guaranteed. */
  readonly rankErrorAt: (rank: number) => number;
}

/**
 * The envelope in units of k of a sealed sketch: half a cluster. Measured: 0.17 units at most over the corpus of docs/accuracy.md, one-way merges
 * of 1,440 sketches included; 0.33 on real rows that come in the order of the clock (test/journeys/real-data).
 */
export const ENVELOPE_UNITS = 0.5;

/** The distribution that the entries and atoms of a state stand for. */
export function cdfKnotsOf(state: SketchState): CdfKnots {
  const n = state.finite;
  const writer = new KnotWriter(state.size + state.atoms.rows.length + 2);
  if (n > 0) writeKnots(state, writer);
  return { n, ...writer.finish(), exact: !state.compressed, rankErrorAt: rankEnvelope(state) };
}

/** Entries carry the digest's own ranks; an atom jumps at the digest's interpolated rank plus the atoms before it. */
function writeKnots(state: SketchState, writer: KnotWriter): void {
  const { means, weights, size } = state;
  const atoms = state.atoms.rows.filter((row) => row.count > 0);
  let atom = 0;
  let atomCount = 0;
  let digestRank = 0; // weight of the entries before the current one
  let lastValue = state.min;
  let lastRank = 0; // digest rank at lastValue, the right limit
  const writeAtomsBefore = (limit: number, rankAtLimit: number): void => {
    for (; atom < atoms.length && atoms[atom]!.value < limit; atom++) {
      const { value, count } = atoms[atom]!;
      const rank = lastRank + (rankAtLimit - lastRank) * position(value, lastValue, limit);
      writer.push(value, rank + atomCount, rank + atomCount + count);
      atomCount += count;
    }
  };
  for (let i = 0; i < size; i++) {
    const mean = means[i]!;
    const weight = Math.abs(weights[i]!);
    const pure = weights[i]! > 0;
    if (i === 0 && !pure && mean > state.min) writer.push(state.min, 0, 0);
    const below = pure ? digestRank : digestRank + weight / 2;
    const upTo = pure ? digestRank + weight : below;
    writeAtomsBefore(mean, below);
    writer.push(mean, below + atomCount, upTo + atomCount);
    digestRank += weight;
    lastValue = mean;
    lastRank = upTo;
  }
  writeAtomsBefore(state.max, digestRank);
  if (atom < atoms.length) writer.push(state.max, digestRank + atomCount, state.finite);
  else if (lastRank < digestRank || lastValue < state.max) writer.push(state.max, state.finite, state.finite);
}

/** Share of the way from `low` to `high`, without overflow. */
function position(value: number, low: number, high: number): number {
  const width = high * 0.5 - low * 0.5;
  return width > 0 ? Math.min(1, Math.max(0, (value * 0.5 - low * 0.5) / width)) : 1;
}

function rankEnvelope(state: SketchState): (rank: number) => number {
  if (!state.compressed) return () => 0;
  const digest = state.finite - state.atoms.count;
  const scale = mixScale(state.coarsest, digest);
  const share = digest / state.finite;
  return (rank) => ENVELOPE_UNITS * share * unitShare(scale, rank);
}

/** Collects knots; those of equal value become one. */
class KnotWriter {
  readonly #values: Float64Array;
  readonly #below: Float64Array;
  readonly #upTo: Float64Array;
  #count = 0;

  constructor(capacity: number) {
    this.#values = new Float64Array(capacity);
    this.#below = new Float64Array(capacity);
    this.#upTo = new Float64Array(capacity);
  }

  push(value: number, below: number, upTo: number): void {
    if (this.#count > 0 && this.#values[this.#count - 1] === value) {
      this.#upTo[this.#count - 1] = upTo;
      return;
    }
    this.#values[this.#count] = value;
    this.#below[this.#count] = below;
    this.#upTo[this.#count] = upTo;
    this.#count++;
  }

  finish(): Pick<CdfKnots, "values" | "below" | "upTo"> {
    const count = this.#count;
    return {
      values: this.#values.subarray(0, count),
      below: this.#below.subarray(0, count),
      upTo: this.#upTo.subarray(0, count),
    };
  }
}
