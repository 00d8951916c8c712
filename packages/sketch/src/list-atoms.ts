import { type Atom, MAX_ATOMS } from "./atom-table.js";
import type { SketchState } from "./sketch-state.js";

/** The atoms of a compressed state, or the values that repeat most in an exact one; ascending. */
export function listAtoms(state: SketchState): readonly Atom[] {
  if (state.compressed) {
    return state.atoms.rows.filter((row) => row.count > 0).map(({ value, count }) => ({ value, count }));
  }
  const known = new Set(state.atoms.rows.map((row) => row.value));
  const repeating: Atom[] = [];
  for (let i = 0; i < state.size; i++) {
    const value = state.means[i]!;
    const count = state.weights[i]!;
    if (count > 1 || known.has(value)) repeating.push({ value, count });
  }
  const rank = (atom: Atom): number => (known.has(atom.value) ? Number.POSITIVE_INFINITY : atom.count);
  repeating.sort((a, b) => (rank(a) === rank(b) ? a.value - b.value : rank(b) - rank(a)));
  return repeating.slice(0, MAX_ATOMS).sort((a, b) => a.value - b.value);
}
