import type { Kernel } from "./kernel.js";
import { TypescriptKernel } from "./typescript-kernel.js";
import { loadWasmKernel } from "./wasm-kernel.js";

let active: Kernel | undefined;

/** The kernel that all sketches of this process use. Sketching is synchronous, so that one is enough. */
export function activeKernel(): Kernel {
  active ??= loadWasmKernel() ?? new TypescriptKernel();
  return active;
}

/** Runs `work` on another kernel: for tests that compare the two, and for measurements. */
export function withKernel<T>(kernel: Kernel, work: () => T): T {
  const before = activeKernel();
  active = kernel;
  try {
    return work();
  } finally {
    active = before;
  }
}
