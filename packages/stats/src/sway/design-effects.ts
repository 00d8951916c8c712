import { chiSquareExceededBy } from "../special/chi-square.js";

/** Design effect of one watched share by how many blocks are pooled. */
export interface DesignEffects {
  /** Ascending. */
  readonly spans: readonly number[];
  /** Upper 95 % limits, each at least 1 and at least the one before. */
  readonly effects: readonly number[];
}

/** One scale as it was measured. */
export interface MeasuredSpan {
  readonly span: number;
  readonly ratio: number;
  /** Degrees of freedom of the ratio; 0: nothing was measured. */
  readonly degrees: number;
}

/** Fewest pooled blocks from which a design effect is learnt. */
export const FEWEST_POOLED = 7;

/** Upper 95 % limit of a design effect: V·ν/χ²(.05; ν). */
export function upperLimit({ ratio, degrees }: MeasuredSpan): number {
  return degrees > 0 ? (ratio * degrees) / chiSquareExceededBy(0.95, degrees) : 1;
}

/**
 * Upper limits of the design effect, monotone in scale.
 *
 * Definition  D(S) = max(1, D at every smaller scale, upper limit at S): a design effect that was measured too small pages for nothing; one that is a
 *             little too large only waits a little longer.
 */
export function designEffects(measured: readonly MeasuredSpan[]): DesignEffects {
  let greatest = 1;
  const effects = measured.map((at) => {
    greatest = Math.max(greatest, upperLimit(at));
    return greatest;
  });
  return { spans: measured.map(({ span }) => span), effects };
}

/** 1, 2, 3, 4, 6, 8, 12, 16, 24 … as long as `longest` is not passed; always 1. */
export function spansUpTo(longest: number): number[] {
  const spans = [1];
  for (let span = 2; span <= longest; span *= 2) {
    spans.push(span);
    if (span * 1.5 <= longest) spans.push(span * 1.5);
  }
  return spans;
}

/**
 * The design effect of a stretch of `span` blocks, not whole in general: that of the next longer span that was measured. Beyond the longest one it grows
 * in proportion, as if nothing averaged out any more.
 */
export function designEffectAt({ spans, effects }: DesignEffects, span: number): number {
  for (let at = 0; at < spans.length; at += 1) if (spans[at]! >= span * (1 - 1e-9)) return effects[at]!;
  const last = spans.length - 1;
  return (effects[last]! * span) / spans[last]!;
}
