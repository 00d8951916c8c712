import { MAX_ATOMS, type TableAtom } from "./atom-table.js";
import type { Kernel } from "./kernel/kernel.js";
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
export function collectAtoms(state: SketchState, kernel: Kernel, count: number): number {
  const { values } = kernel;
  const table = state.atoms;
  const shares: Shares = new Map();
  let left = count;
  for (const row of table.rows) {
    const run = runOf(values, left, row.value);
    if (run === null) continue;
    row.count += run.to - run.from;
    left = takeRun(values, left, run, shares, count);
  }
  const before = table.rows.length;
  const least = Math.max(LEAST_RUN, Math.ceil(count * LEAST_RUN_SHARE));
  for (
    let run = findRun(kernel, left, least, 0);
    run !== null;
    run = findRun(kernel, left, least, run.from)
  ) {
    table.add({ value: values[run.from]!, count: run.to - run.from, known: false });
    left = takeRun(values, left, run, shares, count);
  }
  if (table.rows.length === before) return left;
  const dropped = table.shrink((row) => Math.max(shares.get(row.value) ?? 0, row.count / state.finite));
  for (const row of table.rows) if (!row.known) absorbEntry(state, row);
  insertEntries(state, dropped);
  return left;
}

/** Share of a flush by the value of the atom. */
type Shares = Map<number, number>;

interface Run {
  readonly from: number;
  readonly to: number;
}

function runOf(values: Float64Array, count: number, value: number): Run | null {
  const from = lowerBound(values, 0, count, value);
  if (from >= count || values[from] !== value) return null;
  return { from, to: upperBound(values, from, count, value) };
}

/** Takes a run out of the values; gives the number of those left. */
function takeRun(values: Float64Array, count: number, run: Run, shares: Shares, flushed: number): number {
  shares.set(values[run.from]!, (run.to - run.from) / flushed);
  values.copyWithin(run.from, run.to, count);
  return count - (run.to - run.from);
}

/** The next run of at least `least` equal values. A run that long covers two neighbouring probes. */
function findRun(kernel: Kernel, count: number, least: number, from: number): Run | null {
  const stride = least >> 1;
  for (let i = from + stride; i < count; i += stride) {
    i = kernel.findRepeat(i, count, stride);
    if (i < 0) return null;
    const run = runOf(kernel.values, count, kernel.values[i]!);
    if (run !== null && run.to - run.from >= least) return run;
  }
  return null;
}

/** Entries in ascending order: a state's own, or those of a merge in the kernel. */
interface Entries {
  readonly means: Float64Array;
  readonly weights: Float64Array;
  size: number;
}

/** Makes atoms of the heaviest pure entries; what the table has no room for stays an entry. */
export function promoteRuns(state: SketchState, entries: Entries): void {
  const table = state.atoms;
  for (const row of table.rows) absorbEntry(entries, row);
  const least = Math.max(LEAST_RUN, state.finite * LEAST_ATOM_SHARE);
  const heavy: TableAtom[] = [];
  for (let i = 0; i < entries.size; i++) {
    const count = entries.weights[i]!;
    if (count >= least) heavy.push({ value: entries.means[i]!, count, known: false });
  }
  if (heavy.length === 0) return;
  heavy.sort((a, b) => b.count - a.count || a.value - b.value);
  for (const atom of heavy.slice(0, Math.max(0, MAX_ATOMS - table.rows.length))) {
    const row = { ...atom, count: 0 };
    table.add(row);
    absorbEntry(entries, row);
  }
}

/** Moves a pure entry of the atom's value from the digest to the atom. */
function absorbEntry(entries: Entries, atom: TableAtom): void {
  const { means, weights } = entries;
  let at = lowerBound(means, 0, entries.size, atom.value);
  while (at < entries.size && means[at] === atom.value && weights[at]! < 0) at++;
  if (at >= entries.size || means[at] !== atom.value) return;
  atom.count += weights[at]!;
  means.copyWithin(at, at + 1, entries.size);
  weights.copyWithin(at, at + 1, entries.size);
  entries.size--;
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
