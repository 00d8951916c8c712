import type { Kernel } from "./kernel/kernel.js";

/**
 * Merges pure entries with sorted values into runs of equal values, in the kernel's out arrays; gives the number of runs.
 * Used while a sketch is exact, and to gather what repeats among the entries of several sketches.
 */
export function mergeRuns(kernel: Kernel, entryCount: number, valueCount: number): number {
  const { means, weights, values, outMeans, outWeights } = kernel;
  let count = 0;
  let entry = 0;
  let next = 0;
  while (entry < entryCount || next < valueCount) {
    const fromEntry = next >= valueCount || (entry < entryCount && means[entry]! <= values[next]!);
    const x = fromEntry ? means[entry]! : values[next]!;
    let weight = 0;
    while (entry < entryCount && means[entry] === x) weight += weights[entry++]!;
    while (next < valueCount && values[next] === x) {
      weight++;
      next++;
    }
    outMeans[count] = x;
    outWeights[count] = weight;
    count++;
  }
  return count;
}
