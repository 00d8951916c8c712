import { MAX_ATOMS } from "./atom-table.js";
import { mergeRuns } from "./exact-runs.js";
import { compressLoaded } from "./flush.js";
import { promoteRuns } from "./flush-atoms.js";
import type { Kernel } from "./kernel/kernel.js";
import { SketchState } from "./sketch-state.js";
import { piecesPerCluster, spreadClusters } from "./spread-clusters.js";

/** States merged in one pass; more are merged in groups of this many first, so that memory stays bounded. */
const MOST_AT_ONCE = 4096;

/** Merges states in the order given; they are not changed. */
export function mergeStates(
  states: readonly SketchState[],
  compression: number,
  kernel: Kernel,
): SketchState {
  if (states.length > MOST_AT_ONCE) {
    const groups: SketchState[] = [];
    for (let at = 0; at < states.length; at += MOST_AT_ONCE) {
      groups.push(mergeStates(states.slice(at, at + MOST_AT_ONCE), compression, kernel));
    }
    return mergeStates(groups, compression, kernel);
  }
  const merged = new SketchState(compression, null, knownAtoms(states));
  for (const state of states) addCounts(merged, state);
  mergeThresholds(merged, states);
  const filled = states.filter((state) => state.finite > 0);
  const only = filled[0];
  if (filled.length === 1 && only !== undefined && only.compression === compression)
    copyEntries(merged, only);
  else mergeEntries(merged, filled, kernel);
  return merged;
}

function knownAtoms(states: readonly SketchState[]): number[] {
  const known = new Set<number>();
  for (const state of states) {
    for (const row of state.atoms.rows) if (row.known && known.size < MAX_ATOMS) known.add(row.value);
  }
  return [...known];
}

function addCounts(merged: SketchState, state: SketchState): void {
  merged.finite += state.finite;
  merged.missing += state.missing;
  merged.nan += state.nan;
  merged.positiveInfinity += state.positiveInfinity;
  merged.negativeInfinity += state.negativeInfinity;
  merged.min = Math.min(merged.min, state.min);
  merged.max = Math.max(merged.max, state.max);
  const sum = merged.sum + state.sum;
  merged.sum = Math.min(Number.MAX_VALUE, Math.max(-Number.MAX_VALUE, sum));
}

function events(state: SketchState): number {
  return state.finite + state.missing + state.nan + state.positiveInfinity + state.negativeInfinity;
}

/** A sketch that saw nothing has nothing to add and does not stand in the way. */
function mergeThresholds(merged: SketchState, states: readonly SketchState[]): void {
  const seen = states.filter((state) => events(state) > 0);
  const counters = (seen.length > 0 ? seen : states).map((state) => state.thresholds);
  const first = counters[0] ?? null;
  if (first === null || !counters.every((counter) => counter?.matches(first))) return;
  merged.thresholds = first.clone();
  for (const counter of counters.slice(1)) if (counter !== null) merged.thresholds.add(counter);
}

function copyEntries(merged: SketchState, only: SketchState): void {
  const copy = only.clone();
  merged.means = copy.means;
  merged.weights = copy.weights;
  merged.size = copy.size;
  merged.compressed = copy.compressed;
  merged.coarsest = copy.coarsest;
  merged.sealed = copy.sealed;
  merged.descending = copy.descending;
  merged.atoms = copy.atoms;
}

/** All entries and atoms of all states in one sorted list, then runs of equal values, atoms, and one pass. */
function mergeEntries(merged: SketchState, states: readonly SketchState[], kernel: Kernel): void {
  const size = gatherEntries(states, merged.compression, kernel);
  kernel.sortEntries(size);
  for (const state of states) {
    if (!state.compressed) continue;
    merged.compressed = true;
    merged.coarsest = Math.min(merged.coarsest, state.coarsest);
  }
  if (!merged.compressed) {
    const runs = mergeRuns(kernel, size, 0);
    if (runs <= merged.exactLimit) {
      merged.takeEntries(kernel.outMeans, kernel.outWeights, 0, runs);
      return;
    }
    merged.compressed = true;
  }
  const entries = { means: kernel.means, weights: kernel.weights, size: joinPureRuns(kernel, size) };
  promoteRuns(merged, entries);
  compressLoaded(merged, kernel, entries.size, 0, merged.compression);
}

function gatherEntries(states: readonly SketchState[], compression: number, kernel: Kernel): number {
  const total = states.reduce((sum, state) => sum + state.finite, 0);
  const pieces = states.map((state) => (state.compressed ? piecesPerCluster(state, total, compression) : 1));
  const most = states.reduce((sum, state, i) => sum + pieces[i]! * state.size + state.atoms.rows.length, 0);
  kernel.reserve(0, most);
  const { means, weights } = kernel;
  let at = 0;
  for (const [i, state] of states.entries()) {
    if (pieces[i]! > 1) {
      at += spreadClusters(state, pieces[i]!, means, weights, at);
    } else {
      means.set(state.means.subarray(0, state.size), at);
      weights.set(state.weights.subarray(0, state.size), at);
      at += state.size;
    }
    for (const { value, count } of state.atoms.rows) {
      if (count === 0) continue;
      means[at] = value;
      weights[at] = count;
      at++;
    }
  }
  return at;
}

/** Joins neighbouring pure entries of one value, in place; mixed entries stay as they are. */
function joinPureRuns(kernel: Kernel, size: number): number {
  const { means, weights } = kernel;
  let count = 0;
  let lastPure = -1; // where the last pure entry was written
  for (let i = 0; i < size; i++) {
    const mean = means[i]!;
    const weight = weights[i]!;
    if (weight > 0 && lastPure >= 0 && means[lastPure] === mean) {
      weights[lastPure] = weights[lastPure]! + weight;
      continue;
    }
    means[count] = mean;
    weights[count] = weight;
    if (weight > 0) lastPure = count;
    count++;
  }
  return count;
}
