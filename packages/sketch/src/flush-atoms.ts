import { MAX_ATOMS, type TableAtom } from "./atom-table.js";
import type { SketchState } from "./sketch-state.js";
import { lowerBound, upperBound } from "./threshold-counter.js";

/** A run of equal values in one flush becomes an atom when it is at least this long and this share of the flush. */
const LEAST_RUN = 6;
const LEAST_RUN_SHARE = 1 / 200;

/** Of values that are known exactly, those of at least this share become atoms when exactness ends. */
const LEAST_ATOM_SHARE = 1 / 400;

/**
 * Takes the atoms out of sorted values, those in the table and those that show in this flush, and closes the gaps; gives the
 * number of values left. When there are more than the table holds, those go back to the digest that have the smallest share,
 * be it of this flush or of all events: so a new atom can displace an old one, and a flush without an atom does not lose it.
 */
export function collectAtoms(state: SketchState, values: Float64Array, count: number): number {
  const table = state.atoms;
  const shares = new Map<number, number>();
  let left = count;
  for (const row of table.rows) {
    const from = lowerBound(values, 0, left, row.value);
    if (from >= left || values[from] !== row.value) continue;
    const to = upperBound(values, from, left, row.value);
    row.count += to - from;
    shares.set(row.value, (to - from) / count);
    values.copyWithin(from, to, left);
    left -= to - from;
  }
  const least = Math.max(LEAST_RUN, Math.ceil(count * LEAST_RUN_SHARE));
  const before = table.rows.length;
  for (
    let run = findRun(values, left, least, 0);
    run !== null;
    run = findRun(values, left, least, run.from)
  ) {
    const value = values[run.from]!;
    table.add({ value, count: run.to - run.from, known: false });
    shares.set(value, (run.to - run.from) / count);
    values.copyWithin(run.from, run.to, left);
    left -= run.to - run.from;
  }
  if (table.rows.length === before) return left;
  const dropped = table.shrink((row) => Math.max(shares.get(row.value) ?? 0, row.count / state.finite));
  for (const row of table.rows) if (!row.known) absorbEntry(state, row);
  insertEntries(state, dropped);
  return left;
}

interface Run {
  readonly from: number;
  readonly to: number;
}

/** The next run of at least `least` equal values. A run that long covers two neighbouring probes. */
function findRun(values: Float64Array, count: number, least: number, from: number): Run | null {
  const stride = least >> 1;
  for (let i = from + stride; i < count; i += stride) {
    const value = values[i]!;
    if (values[i - stride] !== value) continue;
    const start = lowerBound(values, 0, i, value);
    const end = upperBound(values, i, count, value);
    if (end - start >= least) return { from: start, to: end };
  }
  return null;
}

/** Makes atoms of the heaviest pure entries; what the table has no room for stays an entry. */
export function promoteRuns(state: SketchState): void {
  const table = state.atoms;
  for (const row of table.rows) absorbEntry(state, row);
  const least = Math.max(LEAST_RUN, state.finite * LEAST_ATOM_SHARE);
  const heavy: TableAtom[] = [];
  for (let i = 0; i < state.size; i++) {
    const count = state.weights[i]!;
    if (count >= least) heavy.push({ value: state.means[i]!, count, known: false });
  }
  heavy.sort((a, b) => b.count - a.count || a.value - b.value);
  for (const atom of heavy.slice(0, Math.max(0, MAX_ATOMS - table.rows.length))) {
    table.add({ ...atom, count: 0 });
  }
  for (const row of table.rows) absorbEntry(state, row);
}

/** Moves a pure entry of the atom's value from the digest to the atom. */
function absorbEntry(state: SketchState, atom: TableAtom): void {
  const { means, weights } = state;
  let at = lowerBound(means, 0, state.size, atom.value);
  while (at < state.size && means[at] === atom.value && weights[at]! < 0) at++;
  if (at >= state.size || means[at] !== atom.value) return;
  atom.count += weights[at]!;
  means.copyWithin(at, at + 1, state.size);
  weights.copyWithin(at, at + 1, state.size);
  state.size--;
}

/** Puts atoms that were given up back among the entries, as pure ones. */
function insertEntries(state: SketchState, atoms: readonly TableAtom[]): void {
  for (const { value, count } of atoms) {
    if (count === 0) continue;
    const at = upperBound(state.means, 0, state.size, value);
    const means = [...state.means.subarray(0, at), value, ...state.means.subarray(at, state.size)];
    const weights = [...state.weights.subarray(0, at), count, ...state.weights.subarray(at, state.size)];
    state.means = Float64Array.from(means);
    state.weights = Float64Array.from(weights);
    state.size++;
  }
}
