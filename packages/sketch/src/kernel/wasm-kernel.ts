import { readFileSync } from "node:fs";
import type { Kernel, PassPlan } from "./kernel.js";

/** What assembly/index.ts exports; pointers are byte offsets into the memory. */
interface KernelExports {
  readonly memory: { readonly buffer: ArrayBuffer; grow(pages: number): number };
  heapBase(): number;
  sortValues(values: number, scratch: number, count: number): number;
  findRepeat(values: number, from: number, count: number, stride: number): number;
  findGap(means: number, from: number, entryCount: number, reach: number, ratio: number): number;
  sumValues(values: number, count: number): number;
  sortEntries(means: number, weights: number, scratch1: number, scratch2: number, count: number): void;
  mergePass(
    values: number,
    valueCount: number,
    means: number,
    weights: number,
    entryCount: number,
    outMeans: number,
    outWeights: number,
    edges: number,
    edgeCount: number,
    descending: number,
    total: number,
    middle: number,
    tail: number,
    growth: number,
    decay: number,
  ): number;
}

const PAGE_BYTES = 65_536;
const FIRST_CAPACITY = 4096;
const MOST_EDGES = 64;
/** Between two arrays: the merging pass puts Infinity before the first or after the last element. */
const PAD_BYTES = 16;

/** The kernel in WebAssembly: the same bytes as the TypeScript one, several times faster at sorting. */
export class WasmKernel implements Kernel {
  readonly name = "wasm";
  values = new Float64Array(0);
  means = new Float64Array(0);
  weights = new Float64Array(0);
  outMeans = new Float64Array(0);
  outWeights = new Float64Array(0);
  readonly #exports: KernelExports;
  readonly #edgesAt: number;
  #edges = new Float64Array(0);

  constructor(binary: Uint8Array) {
    this.#exports = instantiate(binary);
    this.#edgesAt = Math.ceil(this.#exports.heapBase() / 16) * 16;
    this.#lay(FIRST_CAPACITY, FIRST_CAPACITY);
  }

  reserve(valueCount: number, entryCount: number): void {
    const outCount = valueCount + entryCount;
    if (valueCount <= this.values.length && outCount <= this.means.length) return;
    this.#lay(Math.max(valueCount, this.values.length), Math.max(outCount, this.means.length));
  }

  sortValues(count: number): boolean {
    // The sorted values' scratch lies in the out arrays, which nobody has written yet.
    return this.#exports.sortValues(this.values.byteOffset, this.outMeans.byteOffset, count) !== 0;
  }

  findRepeat(from: number, count: number, stride: number): number {
    return this.#exports.findRepeat(this.values.byteOffset, from, count, stride);
  }

  findGap(from: number, entryCount: number, reach: number, ratio: number): number {
    return this.#exports.findGap(this.means.byteOffset, from, entryCount, reach, ratio);
  }

  sumValues(count: number): number {
    return this.#exports.sumValues(this.values.byteOffset, count);
  }

  sortEntries(count: number): void {
    const { means, weights, outMeans, outWeights } = this;
    const scratch = [outMeans.byteOffset, outWeights.byteOffset] as const;
    this.#exports.sortEntries(means.byteOffset, weights.byteOffset, ...scratch, count);
  }

  mergePass(entryCount: number, valueCount: number, plan: PassPlan): number {
    this.#edges.set(plan.edges);
    return this.#exports.mergePass(
      this.values.byteOffset,
      valueCount,
      this.means.byteOffset,
      this.weights.byteOffset,
      entryCount,
      this.outMeans.byteOffset,
      this.outWeights.byteOffset,
      this.#edges.byteOffset,
      plan.edges.length,
      plan.descending ? 1 : 0,
      plan.total,
      plan.middle,
      plan.tail,
      plan.growth,
      plan.decay,
    );
  }

  /** Lays the arrays one after another into the memory, which grows if it must. */
  #lay(valueCount: number, entryCount: number): void {
    const { memory } = this.#exports;
    const end = this.#edgesAt + 8 * (MOST_EDGES + valueCount + 4 * entryCount) + 6 * PAD_BYTES;
    if (end > memory.buffer.byteLength) memory.grow(Math.ceil((end - memory.buffer.byteLength) / PAGE_BYTES));
    let at = this.#edgesAt;
    const take = (count: number): Float64Array<ArrayBuffer> => {
      const array = new Float64Array(memory.buffer, at, count);
      at += array.byteLength + PAD_BYTES;
      return array;
    };
    this.#edges = take(MOST_EDGES);
    this.values = take(valueCount);
    this.means = take(entryCount);
    this.weights = take(entryCount);
    this.outMeans = take(entryCount);
    this.outWeights = take(entryCount);
  }
}

/** The part of the WebAssembly interface that is used here; the library of ES2023 does not know it. */
interface WebAssemblyApi {
  readonly Module: new (bytes: Uint8Array) => object;
  readonly Instance: new (module: object, imports: object) => { readonly exports: unknown };
}

function instantiate(binary: Uint8Array): KernelExports {
  const { WebAssembly } = globalThis as unknown as { WebAssembly: WebAssemblyApi };
  const module = new WebAssembly.Module(binary);
  return new WebAssembly.Instance(module, {}).exports as KernelExports;
}

/** The compiled kernel stands in dist/, two folders up from here both in src/ and in dist/. Null where it is not to be had. */
export function loadWasmKernel(): WasmKernel | null {
  try {
    return new WasmKernel(readFileSync(new URL("../../dist/kernel.wasm", import.meta.url)));
  } catch {
    // No file, or no WebAssembly here: the TypeScript kernel does the same work.
    return null;
  }
}
