import type { SketchOptions } from "@moorline/sketch";

/** What new sketches are made with: thresholds and atoms of the active baseline. */
export interface SketchOptionsSource {
  optionsFor(slice: string, feature: string): SketchOptions;
}
