// The WebAssembly kernel (AssemblyScript). Pointers are byte offsets that src/kernel/wasm-kernel.ts hands out.
export { mergePass } from "./merge-pass";
export { findGap, findRepeat } from "./probes";
export { sortEntries } from "./sort-entries";
export { sortValues } from "./sort-values";
export { sumValues } from "./sum-values";

/** The first byte that is free for scratch arrays. */
export function heapBase(): usize {
  return __heap_base;
}
