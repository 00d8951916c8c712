import type { CdfView } from "../cdf-view.js";
import { eventsAt } from "../events-at.js";

/** A value that repeats. */
export interface Atom {
  readonly value: number;
  readonly share: number;
}

/** The heaviest jumps of a CDF, heaviest first: values that came at least twice. */
export function heaviestAtoms(view: CdfView, most: number): readonly Atom[] {
  const atoms: Atom[] = [];
  for (let i = 0; i < view.values.length; i += 1) {
    const count = view.upTo[i]! - view.below[i]!;
    if (count >= 1.5) atoms.push({ value: view.values[i]!, share: count / view.n });
  }
  return atoms.sort((a, b) => b.share - a.share || a.value - b.value).slice(0, most);
}

/** Values that make up a lattice at most, and their least share. */
const LATTICE_VALUES = 32;
const LATTICE_COVERED = 0.5;

/** Whether values repeat as those of counts, ratings and rounded readings do: most of what is not the heaviest value, which may be a default. */
export function isLattice(view: CdfView): boolean {
  const [heaviest, ...others] = heaviestAtoms(view, LATTICE_VALUES);
  if (heaviest === undefined) return false;
  const covered = others.reduce((sum, { share }) => sum + share, 0);
  return covered > 0 && covered >= LATTICE_COVERED * (1 - heaviest.share);
}

const FEW_VALUES = 7;
const FEW_COVER = 0.99;

/** Whether a handful of values is nearly all there is. */
export function isFewValued(view: CdfView): boolean {
  return heaviestAtoms(view, FEW_VALUES).reduce((sum, { share }) => sum + share, 0) >= FEW_COVER;
}

/** Share of the events that have a value exactly. */
export function shareAt(view: CdfView, value: number): number {
  const { below, upTo } = eventsAt(view, value);
  return (upTo - below) / view.n;
}

/** Share at or below a value; the middle of the jump where one is there. */
export function middleShare(view: CdfView, value: number): number {
  const { below, upTo } = eventsAt(view, value);
  return (below + upTo) / 2 / view.n;
}

/** The view of factor·X + offset, factor above 0. */
export function scaledView(view: CdfView, factor: number, offset: number): CdfView {
  return { ...view, values: view.values.map((value) => factor * value + offset) };
}

/** The view of −X. */
export function mirroredView(view: CdfView): CdfView {
  const { n, values, below, upTo, rankErrorAt } = view;
  return {
    ...view,
    values: values.map((value) => 0 - value).reverse(),
    below: upTo.map((events) => n - events).reverse(),
    upTo: below.map((events) => n - events).reverse(),
    rankErrorAt: (rank) => rankErrorAt(1 - rank),
  };
}

/** The view without one value's jump. */
export function withoutAtom(view: CdfView, value: number): CdfView {
  const at = view.values.indexOf(value);
  if (at < 0) return view;
  const removed = view.upTo[at]! - view.below[at]!;
  const kept = (_: number, i: number) => i !== at;
  const shifted = (events: number, i: number) => (i > at ? events - removed : events);
  return {
    ...view,
    n: view.n - removed,
    values: view.values.filter(kept),
    below: view.below.map(shifted).filter(kept),
    upTo: view.upTo.map(shifted).filter(kept),
  };
}
