import type { Kernel, PassPlan } from "./kernel.js";
import { mergePass } from "./merge-pass.js";
import { sumValues } from "./sum-values.js";

const FIRST_CAPACITY = 1024;

/** The plain TypeScript kernel: the oracle in tests, and the fallback where WebAssembly is not to be had. */
export class TypescriptKernel implements Kernel {
  readonly name = "typescript";
  values = new Float64Array(FIRST_CAPACITY);
  means = new Float64Array(FIRST_CAPACITY);
  weights = new Float64Array(FIRST_CAPACITY);
  outMeans = new Float64Array(FIRST_CAPACITY);
  outWeights = new Float64Array(FIRST_CAPACITY);

  reserve(valueCount: number, entryCount: number): void {
    if (valueCount > this.values.length) this.values = new Float64Array(roundUp(valueCount));
    const outCount = valueCount + entryCount;
    if (outCount <= this.means.length) return;
    const capacity = roundUp(outCount);
    this.means = new Float64Array(capacity);
    this.weights = new Float64Array(capacity);
    this.outMeans = new Float64Array(capacity);
    this.outWeights = new Float64Array(capacity);
  }

  sortValues(count: number): boolean {
    const values = this.values.subarray(0, count).sort();
    // Sorted, the infinities stand at the ends and NaN after them.
    if (count > 0 && !(Number.isFinite(values[0]!) && Number.isFinite(values[count - 1]!))) return false;
    for (let i = 0; i < count; i++) values[i] = values[i]! + 0;
    return true;
  }

  findRepeat(from: number, count: number, stride: number): number {
    const { values } = this;
    for (let i = from; i < count; i += stride) if (values[i] === values[i - stride]) return i;
    return -1;
  }

  findGap(from: number, entryCount: number, reach: number, ratio: number): number {
    const { means } = this;
    for (let i = Math.max(from, reach); i + reach + 1 < entryCount; i++) {
      const width = means[i + 1]! - means[i]!;
      if (!(width > ratio * (means[i]! - means[i - reach]!))) continue;
      if (width > ratio * (means[i + 1 + reach]! - means[i + 1]!)) return i;
    }
    return -1;
  }

  sumValues(count: number): number {
    return sumValues(this.values, count);
  }

  sortEntries(count: number): void {
    const means = this.means.slice(0, count);
    const weights = this.weights.slice(0, count);
    const order = Uint32Array.from({ length: count }, (_, i) => i);
    order.sort((a, b) => means[a]! - means[b]! || a - b);
    for (let i = 0; i < count; i++) {
      this.means[i] = means[order[i]!]!;
      this.weights[i] = weights[order[i]!]!;
    }
  }

  mergePass(entryCount: number, valueCount: number, plan: PassPlan): number {
    return mergePass(this, entryCount, valueCount, plan);
  }
}

function roundUp(count: number): number {
  return 2 ** Math.ceil(Math.log2(count));
}
