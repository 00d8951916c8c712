import type { Pattern } from "./pattern.js";
import type { PatternContext } from "./pattern-context.js";
import { medianShift } from "./tails.js";

/** Everything moved, or spread, or both. */
export function locationScaleRule(context: PatternContext): Pattern | null {
  const { line, m, scale } = context;
  const shift = medianShift(context);
  const root = Math.sqrt(m);
  const moved = Math.abs(shift) >= Math.max(0.1, (5 * line.b) / root);
  const spread = Math.abs(Math.log(line.b)) >= Math.max(0.1, 5.6 / root);
  if (!moved && !spread) return null;
  return {
    kind: moved && spread ? "location and scale" : moved ? "location" : "scale",
    figures: { shift: shift * scale, factor: line.b },
  };
}
