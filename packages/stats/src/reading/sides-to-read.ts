import type { CdfView } from "../cdf-view.js";
import { effectiveEvents } from "../effective-events.js";
import { smoothedView } from "./smoothed-view.js";
import { heaviestAtoms, isLattice, shareAt, withoutAtom } from "./view-shape.js";

/** A value with at least this share of both sides is told apart: its share by the rules of single values, the rest by those of pairs. */
const APART_FROM = 0.05;
const FEWEST_LEFT = 200;

export interface SidesToRead {
  readonly before: CdfView;
  readonly now: CdfView;
  readonly apartFrom: number | null;
}

/** Both sides as the rules of pairs read them: values that jump spread out, or the one value that many events share left out. */
export function sidesToRead(baseline: CdfView, production: CdfView, designEffect: number): SidesToRead {
  if (isLattice(baseline))
    return { before: smoothedView(baseline), now: smoothedView(production), apartFrom: null };
  const [heaviest] = heaviestAtoms(baseline, 1);
  const whole = { before: baseline, now: production, apartFrom: null };
  if (heaviest === undefined || heaviest.share < APART_FROM) return whole;
  if (shareAt(production, heaviest.value) < APART_FROM) return whole;
  const [before, now] = [withoutAtom(baseline, heaviest.value), withoutAtom(production, heaviest.value)];
  const isEnough = before.n > 0 && now.n > 0 && effectiveEvents(before.n, now.n, designEffect) >= FEWEST_LEFT;
  return isEnough ? { before, now, apartFrom: heaviest.value } : whole;
}
