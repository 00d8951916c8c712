import { SEAL_RATIO } from "./compression.js";
import { compress } from "./flush.js";
import type { Kernel } from "./kernel/kernel.js";
import type { SketchState } from "./sketch-state.js";

/** The state as it is encoded: a compressed one goes through one pass at half its compression. The state is not changed. */
export function sealState(state: SketchState, kernel: Kernel): SketchState {
  if (!state.compressed || state.sealed) return state;
  const sealed = state.clone();
  kernel.reserve(0, sealed.size);
  compress(sealed, kernel, 0, Math.floor(sealed.compression * SEAL_RATIO));
  sealed.sealed = true;
  return sealed;
}
