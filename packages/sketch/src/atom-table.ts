import { MoorlineError } from "@moorline/errors";

/** A value and how often it came, exactly. */
export interface Atom {
  readonly value: number;
  readonly count: number;
}

export interface TableAtom {
  readonly value: number;
  count: number;
  /** Named beforehand (the baseline's atoms): counted from the first event and never given up. */
  readonly known: boolean;
}

export const MAX_ATOMS = 32;

/** The values that a compressed sketch counts exactly, outside its digest; ascending. */
export class AtomTable {
  rows: TableAtom[] = [];

  constructor(known: readonly number[]) {
    if (known.length === 0) return;
    const values = [...new Set(known.map((value) => value + 0))].sort((a, b) => a - b);
    if (values.length > MAX_ATOMS || !values.every(Number.isFinite)) {
      throw new MoorlineError("MOORLINE_INPUT_SKETCH_ATOMS", { limit: MAX_ATOMS });
    }
    this.rows = values.map((value) => ({ value, count: 0, known: true }));
  }

  get count(): number {
    let sum = 0;
    for (const row of this.rows) sum += row.count;
    return sum;
  }

  clone(): AtomTable {
    const copy = new AtomTable([]);
    copy.rows = this.rows.map((row) => ({ ...row }));
    return copy;
  }

  has(value: number): boolean {
    return this.rows.some((row) => row.value === value);
  }

  add(atom: TableAtom): void {
    const at = this.rows.findIndex((row) => row.value >= atom.value);
    if (at >= 0 && this.rows[at]!.value === atom.value) this.rows[at]!.count += atom.count;
    else this.rows.splice(at < 0 ? this.rows.length : at, 0, atom);
  }

  /** Gives up the lowest-scored rows that are not known until the table fits, and hands them back, ascending. */
  shrink(score: (row: TableAtom) => number): TableAtom[] {
    const excess = this.rows.length - MAX_ATOMS;
    if (excess <= 0) return [];
    const scored = this.rows.filter((row) => !row.known).map((row) => ({ row, score: score(row) }));
    scored.sort((a, b) => a.score - b.score || b.row.value - a.row.value);
    const dropped = new Set(scored.slice(0, excess).map(({ row }) => row));
    this.rows = this.rows.filter((row) => !dropped.has(row));
    return [...dropped].sort((a, b) => a.value - b.value);
  }
}
