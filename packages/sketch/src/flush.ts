import { mergeRuns } from "./exact-runs.js";
import { findEdges } from "./find-edges.js";
import { collectAtoms, promoteRuns } from "./flush-atoms.js";
import type { Kernel } from "./kernel/kernel.js";
import { passPlan } from "./scale.js";
import type { SketchState } from "./sketch-state.js";
import { addToSum } from "./sum-values.js";

/** Takes the sorted, finite values kernel.values[0, count) into the state. */
export function flushSorted(state: SketchState, kernel: Kernel, count: number): void {
  if (count === 0) return;
  const { values } = kernel;
  state.finite += count;
  state.min = Math.min(state.min, values[0]!);
  state.max = Math.max(state.max, values[count - 1]!);
  state.sum = addToSum(state.sum, kernel, count);
  state.thresholds?.countSorted(values, count);
  state.sealed = false;
  if (state.compressed) {
    const left = collectAtoms(state, kernel, count);
    compress(state, kernel, left, state.compression);
    return;
  }
  loadEntries(state, kernel);
  const runs = mergeRuns(kernel, state.size, count);
  state.takeEntries(kernel.outMeans, kernel.outWeights, 0, runs);
  if (runs > state.exactLimit) leaveExact(state, kernel);
}

/** Gives up exactness: the values that repeat most become atoms, the rest clusters. */
function leaveExact(state: SketchState, kernel: Kernel): void {
  state.compressed = true;
  promoteRuns(state, state);
  compress(state, kernel, 0, state.compression);
}

/** One merging pass over the state's entries and kernel.values[0, valueCount). */
export function compress(state: SketchState, kernel: Kernel, valueCount: number, compression: number): void {
  loadEntries(state, kernel);
  compressLoaded(state, kernel, state.size, valueCount, compression);
}

/** One merging pass over the kernel's entries and values, which become the state's. Turns the direction of the next. */
export function compressLoaded(
  state: SketchState,
  kernel: Kernel,
  entryCount: number,
  valueCount: number,
  compression: number,
): void {
  const total = state.finite - state.atoms.count;
  const edges = findEdges(kernel, entryCount, valueCount);
  const plan = passPlan(compression, state.compression, total, edges, state.descending);
  const count = kernel.mergePass(entryCount, valueCount, plan);
  const start = state.descending ? entryCount + valueCount - count : 0;
  state.takeEntries(kernel.outMeans, kernel.outWeights, start, count);
  state.descending = !state.descending;
  state.coarsest = Math.min(state.coarsest, compression);
}

function loadEntries(state: SketchState, kernel: Kernel): void {
  kernel.means.set(state.means.subarray(0, state.size));
  kernel.weights.set(state.weights.subarray(0, state.size));
}
